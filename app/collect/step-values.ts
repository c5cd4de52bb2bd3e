import type { Answer, Question } from "./form.ts";
import type { StepValues } from "./posted.ts";
import { screenKind, sharesOf } from "./step-fields.ts";
import { answersByPlace, placeOf, type Step } from "./steps.ts";
import { parseTypedNumber, writeNumber } from "./typed-number.ts";
import {
	canonicalUnit,
	fromCanonical,
	type MassUnit,
	type Unit,
	unitFamilyOf,
	unitGiven,
	type UnitFamily,
	unitsFor,
} from "./units.ts";

export type ShowSettings = {
	/** The operation's own unit of weight, until an answer uses another. */
	massUnit: MassUnit;
	language: "en" | "es";
	/** Pounds that the operation's crate holds, by crop, as last told. */
	crates?: Readonly<Record<string, number>>;
	/** What was told in earlier seasons of questions that are filled in from there. */
	earlier?: readonly EarlierAnswer[];
};
export type EarlierAnswer = { season: number; answer: Answer };
/** From where a box is filled in that nobody has answered yet: a season's answer, or the list of plantings. */
export type FilledFrom = { season: number } | "plantings";

/** What the boxes hold when a step is shown: answers as they were typed, else what is already known. */
export function valuesOf(step: Step, questions: Question[], answers: Answer[], settings: ShowSettings): StepValues {
	const byPlace = answersByPlace(answers);
	const shares = sharesOf(step, questions);
	const values: StepValues = {};
	for (const question of questions) {
		const { key } = question;
		const held = byPlace.get(placeOf(key, step.planting?.plantingId ?? null));
		const answer = held ?? earlierOf(key, step, settings)?.answer;
		const family = unitFamilyOf(question);
		if (family !== undefined) Object.assign(values, unitValues(key, family, step, answer, answers, settings));
		if (answer === undefined || answer.kind === "given") values[key] = shown(question, answer, step, settings);
		else if ("options" in question) values[key] = `_${answer.kind}`;
		else values[shares.includes(question) ? screenKind : `${key}_kind`] = answer.kind;
	}
	return values;
}

/** Of a step's questions that nobody has answered yet, from where their boxes are filled in. */
export function listFilledIn(
	step: Step,
	questions: Question[],
	answers: Answer[],
	settings: ShowSettings,
): Record<string, FilledFrom> {
	const byPlace = answersByPlace(answers);
	const filled: Record<string, FilledFrom> = {};
	for (const question of questions) {
		const { key } = question;
		if (byPlace.has(placeOf(key, step.planting?.plantingId ?? null))) continue;
		const earlier = earlierOf(key, step, settings);
		if (earlier) filled[key] = { season: earlier.season };
		else if (isFromPlantings(question) && step.planting) filled[key] = "plantings";
	}
	return filled;
}

function earlierOf(key: string, { planting }: Step, { earlier = [] }: ShowSettings): EarlierAnswer | undefined {
	const plantingId = planting?.plantingId ?? null;
	return earlier.find(({ answer }) => answer.questionKey === key && answer.plantingId === plantingId);
}

function isFromPlantings(question: Question): boolean {
	return question.type === "number" && question.prefill === "bearing_trees";
}

function shown(question: Question, answer: Answer | undefined, step: Step, { language }: ShowSettings) {
	if (answer !== undefined) {
		const isNumber = question.type === "number" || question.type === "percent";
		if (isNumber && typeof answer.value === "number")
			return numberShown(question, answer.value, answer, step, language);
		if (answer.given !== null) return answer.given.text;
		return Array.isArray(answer.value) ? answer.value : String(answer.value ?? "");
	}
	if (question.type === "several" || question.type === "photo") return [];
	return isFromPlantings(question) && step.planting ? String(step.planting.bearingTrees) : "";
}

/** A number as it was typed, unless the page's language reads that otherwise: "12,5" is asked back in English. */
function numberShown(question: Question, value: number, { given }: Answer, step: Step, language: string): string {
	if (given?.text === "") return "";
	const family = unitFamilyOf(question);
	if (family === undefined) return given && readsIn(language, given.text) ? given.text : writeNumber(value);
	const bushelLb = step.planting?.bushelLb ?? null;
	const unit = unitGiven(given, family, bushelLb);
	if (given && unit === given.unit && readsIn(language, given.text)) return given.text;
	return writeNumber(fromCanonical(value, unit, { bushelLb, crateLb: given?.crateLb ?? null }));
}

function readsIn(language: string, text: string): boolean {
	return parseTypedNumber(text, language, { belowZero: true }).ok;
}

function unitValues(
	key: string,
	family: UnitFamily,
	step: Step,
	answer: Answer | undefined,
	answers: Answer[],
	settings: ShowSettings,
): StepValues {
	const unit =
		answer?.kind === "given"
			? unitGiven(answer.given, family, step.planting?.bushelLb ?? null)
			: unitExpected(key, family, step, answers, settings);
	if (family !== "mass") return { [`${key}_unit`]: unit };
	const crateLb = answer?.given?.crateLb ?? settings.crates?.[step.planting?.cropKey ?? ""];
	return { [`${key}_unit`]: unit, [`${key}_crate`]: crateLb === undefined ? "" : writeNumber(crateLb) };
}

/** A unit is chosen once: the same question of another planting has it, else another answer of the family. */
function unitExpected(key: string, family: UnitFamily, step: Step, answers: Answer[], settings: ShowSettings): Unit {
	const offered = unitsFor(family, step.planting?.bushelLb ?? null);
	const alike = answers.filter(({ questionKey }) => questionKey === key);
	const used = [...alike, ...answers].map(({ given }) => given?.unit);
	const own = family === "mass" ? settings.massUnit : canonicalUnit(family);
	const wanted = [...used, own].map((unit) => offered.find((one) => one === unit));
	return wanted.find((unit) => unit !== undefined) ?? canonicalUnit(family);
}
