import type { Answer, FormDefinition, Question } from "#app/collect/form.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";

/** Where an answer stands in a response. */
export type Place = Pick<Answer, "questionKey" | "plantingId">;
/** What an answer says, whichever way it was typed. */
export type Said = Pick<Answer, "kind" | "value">;
export type Act = "corrected" | "set_aside" | "coded" | "own";
/** The newest decision of review about one place. */
export type Correction = Place & {
	act: Act;
	/** The grower's answer of which it was made: of another one it says nothing. */
	was: Said;
	answer: (Said & Pick<Answer, "given">) | { codes: string[] } | null;
};
/** A response's answers as review left them, and the places whose answers count in no figure. */
export type ReviewedAnswers = { answers: Answer[]; setAside: Place[] };

/**
 * A response as it counts: corrected answers in the place of the grower's own, words that were given a code counted under
 * it. What was set aside stands among the answers, since who was asked is still told by it.
 * @param answers as they were sent in; none is changed. @param corrections one a place, the newest.
 */
export function reviewAnswers(
	definition: Pick<FormDefinition, "screens">,
	answers: Answer[],
	corrections: readonly Correction[],
): ReviewedAnswers {
	const byPlace = new Map(answers.map((answer) => [keyOf(answer), answer]));
	const holding = corrections.filter((correction) => holds(correction, byPlace.get(keyOf(correction))));
	for (const { act, answer, ...place } of holding) {
		const own = byPlace.get(keyOf(place));
		if (act === "corrected" && own && answer && "kind" in answer)
			byPlace.set(keyOf(place), { questionKey: own.questionKey, plantingId: own.plantingId, ...answer });
	}
	const questions = new Map(definition.screens.flatMap((one) => one.questions).map((one) => [one.key, one]));
	for (const { act, answer, ...place } of holding) {
		if (act === "coded" && answer && "codes" in answer)
			countUnder(answer.codes, questions.get(place.questionKey), place.plantingId, byPlace);
	}
	const setAside = holding.filter(({ act }) => act === "set_aside");
	return { answers: [...byPlace.values()], setAside: setAside.map(placeOf) };
}

/** Whether the grower still says what a decision was about. */
export function holds({ was }: Pick<Correction, "was">, answer: Said | undefined): boolean {
	return answer !== undefined && sameSaid(was, answer);
}

export function sameSaid(one: Said, other: Said): boolean {
	return one.kind === other.kind && JSON.stringify(one.value) === JSON.stringify(other.value);
}

export function placeOf({ questionKey, plantingId }: Place): Place {
	return { questionKey, plantingId };
}

export function keyOf({ questionKey, plantingId }: Place): string {
	return `${questionKey} ${plantingId ?? ""}`;
}

function countUnder(
	codes: string[],
	question: Question | undefined,
	plantingId: string | null,
	byPlace: Map<string, Answer>,
): void {
	if (question?.type !== "short_text" || !question.codes || codes.length === 0) return;
	const rule = question.codes;
	const at = (questionKey: string) => ({ questionKey, plantingId });
	if ("adds" in rule) {
		const own = byPlace.get(keyOf(at(rule.adds)));
		if (!Array.isArray(own?.value)) return;
		byPlace.set(keyOf(own), { ...own, value: [...new Set([...own.value, ...codes])] });
		return;
	}
	const code = codes.find((one) => rule.to.includes(one));
	const own = byPlace.get(keyOf(at(rule.moves)));
	if (code === undefined || typeof own?.value !== "number") return;
	const before = byPlace.get(keyOf(at(code)));
	const share = own.value + (typeof before?.value === "number" ? before.value : 0);
	byPlace.set(keyOf(own), { ...own, value: 0 });
	byPlace.set(keyOf(at(code)), { ...at(code), kind: "given", value: share, given: null });
}

/**
 * Whether a figure rests on an answer that was set aside: one to a question that its measure is made of, told of a planting
 * of the crop or of the whole operation.
 */
export function restsOnSetAside(
	{ measures }: Pick<FormDefinition, "measures">,
	plantings: readonly { plantingId: string; cropKey: string }[],
	setAside: readonly Place[],
): (fact: { measureKey: string; cropKey: string }) => boolean {
	const cropOf = new Map(plantings.map(({ plantingId, cropKey }) => [plantingId, cropKey]));
	const questionsOf = new Map(measures.map((measure) => [measure.key, new Set(questionsOfMeasure(measure))]));
	return ({ measureKey, cropKey }) =>
		setAside.some(
			({ questionKey, plantingId }) =>
				questionsOf.get(measureKey)?.has(questionKey) &&
				(plantingId === null || cropKey === "all" || cropOf.get(plantingId) === cropKey),
		);
}
