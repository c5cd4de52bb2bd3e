import { expect, test } from "vitest";
import { type AnswerGroup, listAnswerLines } from "./answer-lines.ts";
import type { Answer } from "./form.ts";
import { afterHarvest } from "./forms/after-harvest.ts";
import type { PlantingAsked } from "./steps.ts";

const planting: PlantingAsked = {
	plantingId: "p1",
	cropKey: "apple",
	cultivar: "Amber Dot",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 42,
};
const given = (
	questionKey: string,
	value: Answer["value"],
	typed: Answer["given"] = null,
	plantingId: string | null = null,
): Answer => ({ questionKey, plantingId, kind: "given", value, given: typed });
const weight = (value: number, unit: string) => given("harvested", value, { text: "", unit }, "p1");
const shownIn = (groups: AnswerGroup[], questionKey: string) =>
	groups.flatMap(({ lines }) => lines).find((line) => line.questionKey === questionKey)?.shown;
const shown = (answer: Answer, asked = planting) =>
	shownIn(listAnswerLines(afterHarvest, [asked], [answer]), answer.questionKey);

test("every question that is asked has a line, in the order of the steps", () => {
	const groups = listAnswerLines(afterHarvest, [planting], []);
	expect(groups.map(({ stepKey, lines }) => [stepKey, lines.length])).toEqual([
		["planting-p1", 3],
		["causes", 8],
		["harvest_days", 2],
		["next_year", 2],
	]);
	expect(groups[0]).toMatchObject({ title: { en: "Your planting" }, planting });
	expect(groups.flatMap(({ lines }) => lines).every((line) => line.shown.kind === "none")).toBe(true);
});

test("a question that is ruled out has none", () => {
	const full = [
		given("normal_crop", 100, { text: "100", unit: "lb" }, "p1"),
		given("harvested", 100, { text: "100", unit: "lb" }, "p1"),
	];
	expect(listAnswerLines(afterHarvest, [planting], full).map(({ stepKey }) => stepKey)).not.toContain("causes");
});

test("a weight is told in the unit in which it was given", () => {
	expect(shown(weight(525, "bu"))).toEqual({ kind: "quantity", value: 12.5, unit: "bu" });
	expect(shown(weight(0.1 / 0.45359237, "kg"))).toEqual({ kind: "quantity", value: 0.1, unit: "kg" });
	expect(shown(weight(0, "ton"))).toEqual({ kind: "quantity", value: 0, unit: "ton" });
	expect(shown(weight(525, "bu"), { ...planting, bushelLb: null })).toEqual({
		kind: "quantity",
		value: 525,
		unit: "lb",
	});
	expect(shown(given("harvested", 1520, { text: "40", unit: "crate", crateLb: 38 }, "p1"))).toEqual({
		kind: "quantity",
		value: 40,
		unit: "crate",
		crateLb: 38,
	});
	expect(shown(weight(525, "bin"))).toEqual({ kind: "quantity", value: 525, unit: "lb" });
});

test("each type of answer is told as what it is", () => {
	const trees = given("bearing_trees", 40, { text: "40" }, "p1");
	expect(shown(trees)).toEqual({ kind: "quantity", value: 40, unit: "tree" });
	expect(shown(trees, { ...planting, plantKind: "bush" })).toEqual({ kind: "quantity", value: 40, unit: "bush" });
	expect(shown(given("cause_freeze", 75, { text: "75%" }))).toEqual({ kind: "quantity", value: 75, unit: "percent" });
	expect(shown(given("first_harvest", "2031-09-01"))).toEqual({ kind: "day", day: "2031-09-01" });
	expect(shown(given("bud_set", "none"))).toEqual({ kind: "words", words: [{ en: "Hardly any", es: "Casi ninguna" }] });
	expect(shown(given("bud_set", "no_option"))).toEqual({ kind: "none" });
	expect(shown(given("comment", "<b>Late</b>"))).toEqual({ kind: "text", text: "<b>Late</b>" });
	for (const kind of ["dont_know", "refused"] as const)
		expect(shown({ questionKey: "comment", plantingId: null, kind, value: null, given: null })).toEqual({ kind });
});
