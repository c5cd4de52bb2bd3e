import type { Problem } from "#app/lib/parse-form.ts";
import type { Answer, Question } from "./form.ts";
import { postedText, type StepValues } from "./posted.ts";
import { readKind, readQuestion, type Reading, type ReadSettings } from "./read-question.ts";
import type { Step } from "./steps.ts";

/*
 * Names of a step's fields: `<key>` (box, day, text, choice; several are repeated), `<key>_unit` where there are several
 * units, `<key>_crate` for what the grower's own crate holds, `<key>_kind` for the ticks "dont_know" and "refused"; where
 * there are options, these stand among them as `_dont_know` and `_refused`. Shares that make a hundred have one pair of
 * ticks, `screen_kind`, for all of them.
 */
export type { StepValues };
export const screenKind = "screen_kind";

/** A cent of a percent either way, for shares like 33.33. */
export const sumTolerance = 0.01 + 1e-9;

export type ReadStep = { ok: true; answers: Answer[] } | { ok: false; answers: Answer[]; problems: Problem[] };

/**
 * Reads what was posted for a step. Its answers replace all that the step held; a question left blank that may be gives
 * none. On failure there is one problem a field, in the order of the questions, beside the answers that could be read.
 */
export function readStep(step: Step, questions: Question[], values: StepValues, settings: ReadSettings): ReadStep {
	const plantingId = step.planting?.plantingId ?? null;
	const posted = withSharedCrate(questions, values);
	const readings = new Map<string, Reading>(
		questions.map((question) => [
			question.key,
			readQuestion(question, step.planting?.bushelLb ?? null, withoutOwnTicks(step, question, posted), settings),
		]),
	);
	for (const [key, reading] of sharesRead(sharesOf(step, questions), values, readings)) readings.set(key, reading);
	for (const [key, reading] of daysInOrder(questions, readings)) readings.set(key, reading);

	const problems: Problem[] = [];
	const answers: Answer[] = [];
	for (const [questionKey, reading] of readings) {
		if ("code" in reading) {
			const { box, ...problem } = reading;
			problems.push({ field: box ? `${questionKey}_${box}` : questionKey, ...problem });
		} else if (reading.answer) answers.push({ questionKey, plantingId, ...reading.answer });
	}
	return problems.length > 0 ? { ok: false, answers, problems } : { ok: true, answers };
}

/** Who fills the same crate with two answers of a screen says once what it holds. */
export function withSharedCrate(questions: Question[], values: StepValues): StepValues {
	const names = questions.map(({ key }) => `${key}_crate`);
	const told = names.map((name) => postedText(values, name)).find((text) => text.trim() !== "");
	if (told === undefined) return values;
	const missing = names.filter((name) => postedText(values, name).trim() === "");
	return { ...values, ...Object.fromEntries(missing.map((name) => [name, told])) };
}

/** A share has no ticks of its own, and a blank one is no omission before the sum is known. */
export function sharesOf(step: Step, questions: Question[]): Question[] {
	return questions.filter(({ key }) => step.screen.sumToHundred?.includes(key));
}

function withoutOwnTicks(step: Step, question: Question, values: StepValues): StepValues {
	if (!step.screen.sumToHundred?.includes(question.key)) return values;
	return { [question.key]: postedText(values, question.key) };
}

/**
 * What the shares of a screen say together: all are not known, all are refused, all were skipped, or they make a hundred
 * and those left blank took nothing (0, with nothing typed). A problem of all stands at the first field.
 */
function* sharesRead(
	shares: Question[],
	values: StepValues,
	readings: Map<string, Reading>,
): Generator<[string, Reading]> {
	const [first] = shares;
	if (!first) return;
	const typed = shares.filter(({ key }) => saysSomething(readings.get(key)));
	const ticked = readKind(values, screenKind, typed.length > 0);
	if (ticked !== null && "code" in ticked) {
		yield [(typed[0] ?? first).key, ticked];
	} else if (ticked !== null) {
		for (const { key } of shares) yield [key, ticked];
	} else if (typed.length > 0) {
		for (const { key } of shares) if (!typed.some((share) => share.key === key)) yield [key, nothingTaken];
		const total = sumOf(typed.map(({ key }) => readings.get(key)));
		if (total !== null && Math.abs(total - 100) > sumTolerance)
			yield [first.key, { code: "sum_not_hundred_limit", detail: { total: Math.round(total * 100) / 100 } }];
	}
}

function saysSomething(reading: Reading | undefined): boolean {
	if (!reading) return false;
	return "code" in reading ? reading.code !== "empty" : reading.answer !== null;
}

const nothingTaken: Reading = { answer: { kind: "given", value: 0, given: { text: "" } } };

/** Null when one of them is to be mended first. */
function sumOf(readings: (Reading | undefined)[]): number | null {
	let sum = 0;
	for (const reading of readings) {
		if (!reading || "code" in reading) return null;
		sum += typeof reading.answer?.value === "number" ? reading.answer.value : 0;
	}
	return sum;
}

function* daysInOrder(questions: Question[], readings: Map<string, Reading>): Generator<[string, Reading]> {
	const dayOf = (key: string) => {
		const reading = readings.get(key);
		return reading && "answer" in reading && typeof reading.answer?.value === "string" ? reading.answer.value : null;
	};
	for (const question of questions) {
		if (question.type !== "date" || question.notBefore === undefined) continue;
		const [from, day] = [dayOf(question.notBefore), dayOf(question.key)];
		if (from !== null && day !== null && day < from) yield [question.key, { code: "date_order" }];
	}
}
