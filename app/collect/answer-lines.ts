import type { Words } from "#app/lib/words.ts";
import type { Answer, FormDefinition, Question } from "./form.ts";
import { answersByPlace, listAllSteps, listAsked, placeOf, type PlantingAsked } from "./steps.ts";
import { fromCanonical, type Unit, unitFamilyOf, unitGiven } from "./units.ts";

export type ShownUnit = Unit | "tree" | "bush" | "plants" | "percent" | "count";
export type ShownAnswer =
	/** `crateLb` is what one crate holds, where the unit is the grower's own crate. */
	| { kind: "quantity"; value: number; unit: ShownUnit; crateLb?: number }
	| { kind: "day"; day: string }
	| { kind: "words"; words: Words[] }
	| { kind: "text"; text: string }
	/** None where photos were added, and taken away since. */
	| { kind: "photos"; photoIds: string[] }
	| { kind: "dont_know" }
	| { kind: "refused" }
	| { kind: "none" };
export type AnswerGroup = {
	stepKey: string;
	title: Words;
	planting: PlantingAsked | null;
	lines: { questionKey: string; text: Words; shown: ShownAnswer }[];
};

/**
 * What a review page, a receipt or the desk lists: every question that is asked, step by step, with what was answered,
 * amounts in the unit in which they were given.
 */
export function listAnswerLines(
	definition: FormDefinition,
	plantings: PlantingAsked[],
	answers: Answer[],
): AnswerGroup[] {
	const byPlace = answersByPlace(answers);
	return listAsked(definition, plantings, answers).map(({ step, questions }) => ({
		stepKey: step.key,
		title: step.screen.title,
		planting: step.planting,
		lines: questions.map((question) => ({
			questionKey: question.key,
			text: question.text,
			shown: shownAs(question, byPlace.get(placeOf(question.key, step.planting?.plantingId ?? null)), step.planting),
		})),
	}));
}

export type Difference = { questionKey: string; text: Words; mine: ShownAnswer; theirs: ShownAnswer };

/**
 * What a step would say with `mine` in place of the answers it holds, question by question where the two differ.
 * Photos are no matter of it, since they are kept one by one.
 * @param unread what was typed for questions and could not be read, by question.
 */
export function listDifferences(
	{ definition, plantings, answers }: { definition: FormDefinition; plantings: PlantingAsked[]; answers: Answer[] },
	stepKey: string,
	mine: Answer[],
	unread: ReadonlyMap<string, string> = new Map(),
): Difference[] {
	const step = listAllSteps(definition, plantings).find(({ key }) => key === stepKey);
	const planting = step?.planting ?? null;
	const [here, there] = [answersByPlace(mine), answersByPlace(answers)];
	const typedIn = (step?.screen.questions ?? []).filter(({ type }) => type !== "photo");
	return typedIn.flatMap((question) => {
		const at = placeOf(question.key, planting?.plantingId ?? null);
		const typed = unread.get(question.key);
		const one = typed ? ({ kind: "text", text: typed } as const) : shownAs(question, here.get(at), planting);
		const other = shownAs(question, there.get(at), planting);
		const same = JSON.stringify(one) === JSON.stringify(other);
		return same ? [] : [{ questionKey: question.key, text: question.label ?? question.text, mine: one, theirs: other }];
	});
}

/** One answer as it is told, in the unit in which it was given. */
export function shownAs(question: Question, answer: Answer | undefined, planting: PlantingAsked | null): ShownAnswer {
	if (answer === undefined) return { kind: "none" };
	if (answer.kind !== "given") return { kind: answer.kind };
	const { value } = answer;
	switch (question.type) {
		case "number":
		case "percent":
			return typeof value === "number" ? quantity(question, value, answer.given, planting) : { kind: "none" };
		case "date":
			return { kind: "day", day: String(value) };
		case "choice":
		case "rating":
		case "several": {
			const chosen = Array.isArray(value) ? value : [value];
			const words = question.options.filter(({ key }) => chosen.includes(key)).map(({ text }) => text);
			return words.length > 0 ? { kind: "words", words } : { kind: "none" };
		}
		case "short_text":
		case "long_text":
			return { kind: "text", text: String(value) };
		case "photo":
			return { kind: "photos", photoIds: Array.isArray(value) ? value : [] };
	}
}

function quantity(
	question: Extract<Question, { type: "number" | "percent" }>,
	value: number,
	given: Answer["given"],
	planting: PlantingAsked | null,
): ShownAnswer {
	if (question.type === "percent") return { kind: "quantity", value, unit: "percent" };
	const family = unitFamilyOf(question);
	if (family === undefined) {
		const unit = question.unitFamily === "trees" ? (planting?.plantKind ?? "plants") : "count";
		return { kind: "quantity", value, unit };
	}
	const bushelLb = planting?.bushelLb ?? null;
	const sizes = { bushelLb, crateLb: given?.crateLb ?? null };
	const unit = unitGiven(given, family, bushelLb);
	// Dividing what was multiplied can leave 12.500000000000002.
	const amount = Number(fromCanonical(value, unit, sizes).toPrecision(12));
	if (unit !== "crate") return { kind: "quantity", value: amount, unit };
	return { kind: "quantity", value: amount, unit, crateLb: sizes.crateLb ?? undefined };
}
