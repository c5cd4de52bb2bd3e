import { questionsIn } from "#app/lib/condition.ts";
import { checksOf } from "./checks.ts";
import { codeFaults } from "./code-faults.ts";
import { conditionFaults, type Fault, type Placed } from "./condition-faults.ts";
import type { FormDefinition, Question, Screen } from "./form.ts";
import { measureFaults } from "./measure-faults.ts";

type Form = Pick<FormDefinition, "screens" | "measures">;

/**
 * Everything that would make a form ask or count wrongly: one key for two things, a condition on a question that comes
 * later or never, shares and measures of what is no number, words counted as what is not asked.
 */
export function* faultsOf(form: Form): Generator<Fault> {
	const placed = placeQuestions(form.screens);
	const byKey = new Map(placed.map((one) => [one.question.key, one]));
	yield* keyFaults(form, placed);
	for (const [index, screen] of form.screens.entries()) yield* screenFaults(screen, ["screens", index], byKey);
	if (placed.filter(({ question }) => question.type === "photo").length > 1)
		yield { path: ["screens"], message: "two questions ask for photos, of which a response has five in all" };
	for (const one of placed) {
		const { question, at, path, screen } = one;
		const asked = { what: `the condition of "${question.key}"`, before: at, perPlanting: screen.perPlanting };
		if (question.condition) yield* conditionFaults(question.condition, asked, path, byKey);
		yield* codeFaults(one, byKey);
	}
	for (const [index, measure] of form.measures.entries()) yield* measureFaults(measure, ["measures", index], byKey);
	yield* protectedFaults(form.measures);
}

function* protectedFaults(measures: Form["measures"]): Generator<Fault> {
	const bases = new Set(measures.filter(({ base }) => base).map(({ key }) => key));
	for (const [index, { key, protects = [] }] of measures.entries()) {
		for (const base of protects.filter((one) => !bases.has(`base.${one}`)))
			yield {
				path: ["measures", index, "protects"],
				message: `measure "${key}" is made of "${base}", which is no base quantity of the form`,
			};
	}
}

function placeQuestions(screens: Screen[]): Placed[] {
	const placed = screens.flatMap((screen, s) =>
		screen.questions.map((question, q) => ({ question, screen, path: ["screens", s, "questions", q] })),
	);
	return placed.map((one, at) => ({ ...one, at }));
}

function* keyFaults(form: Form, placed: Placed[]): Generator<Fault> {
	yield* repeated(form.screens, "screen", ["screens"]);
	yield* repeated(form.measures, "measure", ["measures"]);
	yield* repeated(form.screens.flatMap(checksOf), "check", ["screens"]);
	const taken = new Set(["screen_kind", "confirm"]);
	for (const { question, screen, path } of placed) {
		if (taken.has(question.key))
			yield { path: [...path, "key"], message: `"${question.key}" names two questions, or a field beside another` };
		for (const end of ["", "_unit", "_crate", "_kind"]) taken.add(question.key + end);
		yield* optionFaults(question, screen, [...path, "options"]);
	}
}

function* optionFaults(question: Question, screen: Screen, path: (string | number)[]): Generator<Fault> {
	if (!("options" in question)) return;
	yield* repeated(question.options, `option of "${question.key}"`, path);
	if (question.type === "several" && !screen.perPlanting && question.options.some(({ crops }) => crops))
		yield { path, message: `"${question.key}" has options for some crops, and is asked of no planting` };
	if (question.type === "rating" && new Set(question.options.map(({ score }) => score === undefined)).size > 1)
		yield { path, message: `"${question.key}" has a score for some of its options only` };
}

function* repeated(things: { key: string }[], what: string, path: (string | number)[]): Generator<Fault> {
	const seen = new Set<string>();
	for (const [index, { key }] of things.entries()) {
		if (seen.has(key)) yield { path: [...path, index, "key"], message: `two things are ${what} "${key}"` };
		seen.add(key);
	}
}

function* screenFaults(screen: Screen, path: (string | number)[], byKey: Map<string, Placed>): Generator<Fault> {
	const first = byKey.get(screen.questions[0]?.key ?? "")?.at ?? 0;
	const asked = { what: `the condition of screen "${screen.key}"`, before: first, perPlanting: screen.perPlanting };
	if (screen.condition) yield* conditionFaults(screen.condition, asked, path, byKey);
	yield* checkFaults(screen, first, path, byKey);
	yield* photoFaults(screen, path);
	const ofScreen = (key: string) => screen.questions.find((question) => question.key === key);
	for (const key of screen.sumToHundred ?? []) {
		if (ofScreen(key)?.type !== "percent")
			yield { path: [...path, "sumToHundred"], message: `"${key}" is no percent question of screen "${screen.key}"` };
	}
	for (const [index, question] of screen.questions.entries()) {
		if (question.type !== "date" || question.notBefore === undefined) continue;
		const earlier = screen.questions.slice(0, index).find(({ key }) => key === question.notBefore);
		if (earlier?.type !== "date")
			yield {
				path: [...path, "questions", index, "notBefore"],
				message: `"${question.key}" comes after "${question.notBefore}", which is no earlier date of its screen`,
			};
	}
}

/** Photos arrive one by one and are none of a step's other answers, which are kept all at once. */
function* photoFaults({ key, questions, perPlanting }: Screen, path: (string | number)[]): Generator<Fault> {
	if (!questions.some(({ type }) => type === "photo")) return;
	if (perPlanting) yield { path, message: `screen "${key}" asks for photos of each planting` };
	if (questions.length > 1) yield { path, message: `screen "${key}" asks for more than photos` };
}

function* checkFaults(
	screen: Screen,
	first: number,
	path: (string | number)[],
	byKey: Map<string, Placed>,
): Generator<Fault> {
	for (const [index, { key, when, question }] of (screen.checks ?? []).entries()) {
		const at = [...path, "checks", index];
		const before = first + screen.questions.length;
		const asked = { what: `check "${key}"`, before, perPlanting: screen.perPlanting };
		yield* conditionFaults(when, asked, at, byKey);
		// A confirmation is kept with the answer, so there must be one whenever the check is raised.
		if (!questionsIn(when).includes(question) || !screen.questions.some((one) => one.key === question))
			yield { path: at, message: `check "${key}" stands beside "${question}", which it does not speak of` };
	}
}
