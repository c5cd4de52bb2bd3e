import { shownAs, type ShownAnswer } from "./answer-lines.ts";
import { type CheckMessage, listOpenChecks } from "./checks.ts";
import type { Words } from "./form.ts";
import { answersByPlace, type Asking, placeOf } from "./steps.ts";

/** A soft check as a grower is asked about it: the odd answers said, and why they are odd. */
export type CheckToAsk = { key: string; about: { label: Words; shown: ShownAnswer }[]; message: CheckMessage };

/** What to ask about the answers of a step that were kept. */
export function listChecksToAsk(asking: Asking, stepKey: string): CheckToAsk[] {
	const byPlace = answersByPlace(asking.answers);
	return listOpenChecks(asking)
		.filter(({ kind, step }) => kind === "soft" && step.key === stepKey)
		.map(({ key, message, about, step: { planting } }) => ({
			key,
			message,
			about: about.map((question) => ({
				label: question.label ?? question.text,
				shown: shownAs(question, byPlace.get(placeOf(question.key, planting?.plantingId ?? null)), planting),
			})),
		}));
}
