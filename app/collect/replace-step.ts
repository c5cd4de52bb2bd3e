import type { Answer } from "./form.ts";
import type { AskedStep } from "./steps.ts";

/**
 * The answers that a step's new ones take the place of: those of the questions asked, whether they are answered again or
 * not, and of those that are answered. Photos are none of them: they come and go one by one.
 * @param unread questions whose answers stay as they are, since what is typed for them cannot be read yet.
 */
export function replacedBy({ step, questions }: AskedStep, all: Answer[], next: Answer[], unread: string[]): Answer[] {
	const plantingId = step.planting?.plantingId ?? null;
	const asked = questions.filter(({ type }) => type !== "photo").map(({ key }) => key);
	const replaced = new Set([...asked, ...next.map(({ questionKey }) => questionKey)]);
	for (const key of unread) replaced.delete(key);
	return all.filter((answer) => answer.plantingId === plantingId && replaced.has(answer.questionKey));
}

/** All answers with a step's new ones in their place. */
export function withStep(asked: AskedStep, all: Answer[], next: Answer[], unread: string[]): Answer[] {
	const replaced = new Set(replacedBy(asked, all, next, unread));
	return [...all.filter((answer) => !replaced.has(answer)), ...next];
}
