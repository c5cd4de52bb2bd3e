import { type Condition, evaluate, type Known, questionsIn } from "#app/lib/condition.ts";
import type { Words } from "#app/lib/words.ts";
import type { Answer, Check, Confirmation, Question, Screen } from "./form.ts";
import { answersByPlace, type Asking, keptAnswers, listAsked, placeOf, type Step } from "./steps.ts";

/** What is odd: the form's own words, or that a number is lower or higher than its question expects. */
export type CheckMessage = Words | "lower" | "higher";
/** A check whose answers are odd. */
export type RaisedCheck = {
	key: string;
	kind: "hard" | "soft";
	message: CheckMessage;
	/** The question beside which it stands, and all that it speaks of. */
	question: Question;
	about: Question[];
	step: Step;
	/** The values that are odd, as a confirmation repeats them. */
	values: Confirmation["values"];
	confirmed: boolean;
};

/** The checks of a screen: its own, and one for each end of the range in which an answer is expected. */
export function checksOf(screen: Screen): (Omit<Check, "message"> & { message: CheckMessage })[] {
	const expected = screen.questions.flatMap((question) => {
		if (question.type !== "number" && question.type !== "percent") return [];
		const { softMin, softMax } = question.limits ?? {};
		const end = (compare: "<" | ">", value: number | undefined, name: string, message: CheckMessage) =>
			value === undefined
				? []
				: {
						key: `${question.key}_${name}`,
						kind: "soft" as const,
						when: { compare, question: question.key, to: { value } } satisfies Condition,
						question: question.key,
						message,
					};
		return [end("<", softMin, "soft_min", "lower"), end(">", softMax, "soft_max", "higher")].flat();
	});
	return [...(screen.checks ?? []), ...expected];
}

/**
 * Every check that the answers raise, hard and soft, confirmed or not, in the order of the form. Only answers that would
 * be sent in count; where they do not decide a check, it is not raised.
 */
export function listRaisedChecks({ definition, plantings, answers }: Asking): RaisedCheck[] {
	const kept = answersByPlace(keptAnswers(definition, plantings, answers));
	const valueAt = (key: string, plantingId: string | null) => kept.get(placeOf(key, plantingId))?.value ?? null;
	const rows = plantings.map(
		({ plantingId }) =>
			(key: string) =>
				valueAt(key, plantingId),
	);
	return listAsked(definition, plantings, answers).flatMap(({ step, questions }) => {
		const plantingId = step.planting?.plantingId ?? null;
		const known: Known = { value: (key) => valueAt(key, plantingId) ?? valueAt(key, null), rows };
		return checksOf(step.screen).flatMap((check): RaisedCheck[] => {
			const question = questions.find(({ key }) => key === check.question);
			if (!question || evaluate(check.when, known) !== true) return [];
			const named = questionsIn(check.when);
			const values = named.map((key) => known.value(key) ?? rows.map((row) => row(key)));
			const answer = kept.get(placeOf(question.key, plantingId));
			const confirmed = answer?.confirmed?.some((one) => isOf(one, { key: check.key, values })) ?? false;
			const about = questions.filter(({ key }) => named.includes(key));
			return [{ ...check, question, about, step, values, confirmed }];
		});
	});
}

/** The checks that keep answers from being sent in: hard ones, and soft ones that nobody has confirmed. */
export function listOpenChecks(asking: Asking): RaisedCheck[] {
	return listRaisedChecks(asking).filter(({ kind, confirmed }) => kind === "hard" || !confirmed);
}

/**
 * The new answers of a step with the checks that are confirmed of each: those that were before, as long as their values
 * are the same, and those that are confirmed now.
 * @param before what has been kept so far; only what it raises was asked about, and can be confirmed.
 * @param confirmed keys of the checks that the grower confirms now.
 */
export function withConfirmations(
	step: Step,
	before: Asking,
	answers: Answer[],
	confirmed: ReadonlySet<string> = new Set(),
): Answer[] {
	const ofStep = (check: RaisedCheck) => check.step.key === step.key && check.kind === "soft";
	const agreed = listRaisedChecks(before).filter(
		(check) => ofStep(check) && (check.confirmed || confirmed.has(check.key)),
	);
	if (agreed.length === 0) return answers;
	const next = { ...before, answers: [...answersOutside(step, before.answers), ...answers] };
	const raised = listRaisedChecks(next).filter(ofStep);
	return answers.map((answer) => {
		const held = raised.filter(
			(check) =>
				check.question.key === answer.questionKey &&
				agreed.some(({ key, values }) => isOf({ check: key, values }, check)),
		);
		if (held.length === 0) return answer;
		return { ...answer, confirmed: held.map(({ key, values }): Confirmation => ({ check: key, values })) };
	});
}

/** All answers but those to a step's own questions. */
export function answersOutside(step: Step, answers: Answer[]): Answer[] {
	const plantingId = step.planting?.plantingId ?? null;
	const own = new Set(step.screen.questions.map(({ key }) => key));
	return answers.filter((answer) => answer.plantingId !== plantingId || !own.has(answer.questionKey));
}

function isOf(confirmation: Confirmation, { key, values }: { key: string; values: Confirmation["values"] }): boolean {
	return confirmation.check === key && JSON.stringify(confirmation.values) === JSON.stringify(values);
}
