import { expect, test } from "vitest";
import { holdAgainst, type PlannedFigure, type PlannedLevel, type ToldCell } from "./brief.ts";

const levelOf = new Map<string, PlannedLevel>([
	["c1", "county"],
	["c2", "county"],
	["c3", "county"],
	["c4", "county"],
	["s1", "state"],
]);
const told = (areaKey: string, respondents: number, cv: number | null, value: number | null = 40): ToldCell => ({
	areaKey,
	cropKey: "apple",
	status: "shown",
	respondents,
	figures: [{ measureKey: "crop_loss", cv, value }],
});
const cells: ToldCell[] = [
	told("c1", 9, 0.1),
	told("c2", 6, 0.4),
	{ areaKey: "c3", cropKey: "apple", status: "withheld", respondents: null, figures: null },
	{ areaKey: "c4", cropKey: "apple", status: "no_growers", respondents: null, figures: null },
	told("s1", 15, 0.05),
	{ ...told("c1", 9, 0.1), cropKey: "plum" },
];
const plan: PlannedFigure = {
	measureKey: "crop_loss",
	cropKey: "apple",
	level: "county",
	smallestN: null,
	largestCv: null,
};

test("areas with growers count, those told, and those told as well as planned", () => {
	expect(holdAgainst(plan, cells, levelOf)).toEqual({ areas: 3, told: 2, asPlanned: 2 });
	expect(holdAgainst({ ...plan, smallestN: 8 }, cells, levelOf)).toEqual({ areas: 3, told: 2, asPlanned: 1 });
	expect(holdAgainst({ ...plan, largestCv: 0.3 }, cells, levelOf)).toEqual({ areas: 3, told: 2, asPlanned: 1 });
	expect(holdAgainst({ ...plan, smallestN: 9, largestCv: 0.1 }, cells, levelOf).asPlanned).toBe(1);
	expect(holdAgainst({ ...plan, level: "state" }, cells, levelOf)).toEqual({ areas: 1, told: 1, asPlanned: 1 });
});

test("a figure that is too rough to be told counts as not told, and a measure that was not asked as neither", () => {
	expect(holdAgainst(plan, [told("c1", 9, null, null)], levelOf)).toEqual({ areas: 1, told: 0, asPlanned: 0 });
	expect(holdAgainst({ ...plan, measureKey: "yield" }, cells, levelOf)).toEqual({ areas: 3, told: 0, asPlanned: 0 });
});
