import { withConfirmations } from "./checks.ts";
import type { Answer } from "./form.ts";
import { readPostedStep } from "./posted-step.ts";
import { postedText, type StepValues } from "./posted.ts";
import { readKind, readQuestion, type ReadSettings } from "./read-question.ts";
import { withStep } from "./replace-step.ts";
import { screenKind, sharesOf, withSharedCrate } from "./step-fields.ts";
import { type Asking, type AskedStep, findStep } from "./steps.ts";

/** What of a step reads well as it is being typed, and the questions whose boxes hold what cannot be read yet. */
export type ReadWell = { answers: Answer[]; unread: string[] };

/**
 * Reads a step while somebody types in it: each question for itself, an empty one as no answer. What the questions have to
 * say together (shares that make a hundred, days in order) is asked when the step is finished; a draft may still break it.
 * @returns undefined for a step that the form does not have.
 */
export function readWell(
	asking: Asking,
	stepKey: string,
	values: StepValues,
	settings: ReadSettings,
): ReadWell | undefined {
	const { confirm, ...unconfirmed } = values;
	const known = confirm === undefined ? asking : asAsked(asking, stepKey, unconfirmed, settings);
	const whole = readPostedStep(known, stepKey, values, settings);
	if (whole?.problems.length === 0) return { answers: whole.answers, unread: [] };
	const asked = whole ?? findStep(asking, stepKey);
	if (!asked) return undefined;
	const { answers, unread } = readEach(asked, values, settings);
	return { answers: withConfirmations(asked.step, asking, answers), unread };
}

/** What a phone without signal has asked about: it had the odd answers itself before they were confirmed. */
function asAsked(asking: Asking, stepKey: string, values: StepValues, settings: ReadSettings): Asking {
	const asked = findStep(asking, stepKey);
	const read = asked && readWell(asking, stepKey, values, settings);
	return read ? { ...asking, answers: withStep(asked, asking.answers, read.answers, read.unread) } : asking;
}

function readEach({ step, questions }: AskedStep, typed: StepValues, settings: ReadSettings): ReadWell {
	const values = withSharedCrate(questions, typed);
	const shares = sharesOf(step, questions);
	const anyShare = shares.some(({ key }) => postedText(values, key).trim() !== "");
	const ticked = shares.length > 0 ? readKind(values, screenKind, anyShare) : null;
	const well: ReadWell = { answers: [], unread: [] };
	for (const question of questions) {
		const isShare = shares.includes(question);
		const own = isShare ? { [question.key]: postedText(values, question.key) } : values;
		const reading = isShare && ticked ? ticked : readQuestion(question, step.planting?.bushelLb ?? null, own, settings);
		if ("code" in reading) {
			// An empty box is no answer; an empty one for what a crate holds leaves the answer beside it without a meaning.
			if (reading.code !== "empty" || reading.box) well.unread.push(question.key);
		} else if (reading.answer) {
			well.answers.push({
				questionKey: question.key,
				plantingId: step.planting?.plantingId ?? null,
				...reading.answer,
			});
		}
	}
	return well;
}
