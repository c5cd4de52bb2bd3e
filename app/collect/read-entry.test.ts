import { describe, expect, test } from "vitest";
import { afterHarvest } from "./forms/after-harvest.ts";
import type { StepValues } from "./posted.ts";
import { entryValues, readEntry } from "./read-entry.ts";
import type { PlantingAsked } from "./steps.ts";

const planting = (plantingId: string): PlantingAsked => ({
	plantingId,
	cropKey: "apple",
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 48,
});
const form = { definition: afterHarvest, plantings: [planting("p1"), planting("p2")] };
const settings = { language: "en", season: 2031, today: "2031-12-01" } as const;

const plantingValues = (id: string, trees: string, normal: string, picked: string): StepValues => ({
	[`planting-${id}.bearing_trees`]: trees,
	[`planting-${id}.normal_crop`]: normal,
	[`planting-${id}.normal_crop_unit`]: "lb",
	[`planting-${id}.harvested`]: picked,
	[`planting-${id}.harvested_unit`]: "lb",
});
const noLoss = { ...plantingValues("p1", "40", "4000", "4000"), ...plantingValues("p2", "10", "900", "900") };
const read = (typed: StepValues) => {
	const { answers, problems, checks } = readEntry(form, typed, settings);
	return {
		answers: Object.fromEntries(
			answers.map(({ questionKey, plantingId, kind, value }) => [
				[questionKey, plantingId].filter(Boolean).join(" "),
				kind === "given" ? value : kind,
			]),
		),
		problems: problems.map(({ field, code }) => `${field}: ${code}`),
		checks,
	};
};

describe("a whole form typed on one page", () => {
	test("is read planting by planting", () => {
		expect(read(noLoss)).toEqual({
			answers: {
				"bearing_trees p1": 40,
				"normal_crop p1": 4000,
				"harvested p1": 4000,
				"bearing_trees p2": 10,
				"normal_crop p2": 900,
				"harvested p2": 900,
			},
			problems: [],
			checks: [],
		});
	});

	test("names the box of each problem, and reads what can be read", () => {
		const { problems, answers } = read({ ...noLoss, "planting-p2.harvested": "plenty", "planting-p1.normal_crop": "" });
		expect(problems).toEqual(["planting-p1.normal_crop: empty", "planting-p2.harvested: not_a_number"]);
		expect(answers["harvested p1"]).toBe(4000);
	});

	test("leaves out what the earlier answers leave unasked, however it is filled in", () => {
		expect(read({ ...noLoss, "causes.cause_frost": "nonsense" })).toMatchObject({ problems: [] });
		const lost = { ...noLoss, "planting-p1.harvested": "1000" };
		const [first, second] = afterHarvest.screens.find(({ key }) => key === "causes")!.sumToHundred!;
		expect(read({ ...lost, [`causes.${first}`]: "70", [`causes.${second}`]: "20" }).problems).toEqual([
			`causes.${first}: sum_not_hundred_limit`,
		]);
		expect(read({ ...lost, [`causes.${first}`]: "70", [`causes.${second}`]: "30" })).toMatchObject({
			problems: [],
			answers: { [first!]: 70, [second!]: 30 },
		});
	});

	test("takes a question mark for don't know and an x for would rather not say", () => {
		const { answers, problems } = read({
			...noLoss,
			"planting-p1.normal_crop": "?",
			"planting-p2.harvested": " X ",
			"next_year.comment": "?",
		});
		expect(problems).toEqual([]);
		expect(answers).toMatchObject({ "normal_crop p1": "dont_know", "harvested p2": "refused", comment: "dont_know" });
	});

	test("shares are known or not all together", () => {
		const lost = { ...noLoss, "planting-p1.harvested": "1000" };
		const [first, second] = afterHarvest.screens.find(({ key }) => key === "causes")!.sumToHundred!;
		expect(read({ ...lost, [`causes.${first}`]: "?" }).answers).toMatchObject({
			[first!]: "dont_know",
			[second!]: "dont_know",
		});
	});

	test("asks once about odd answers, and again when they were changed since", () => {
		const odd = { ...noLoss, "planting-p1.harvested": "9000" };
		const [check, ...others] = read(odd).checks;
		expect(others).toEqual([]);
		expect(check!.stepKey).toBe("planting-p1");
		expect(read({ ...odd, confirm: check!.id }).checks).toEqual([]);
		expect(read({ ...odd, confirm: check!.id, "planting-p1.harvested": "9500" }).checks).toHaveLength(1);
		const { answers } = readEntry(form, { ...odd, confirm: check!.id }, settings);
		expect(answers.filter(({ confirmed }) => confirmed).map(({ questionKey }) => questionKey)).toEqual(["harvested"]);
	});
});

describe("the boxes of a whole form", () => {
	const show = { massUnit: "lb", language: "en" } as const;

	test("hold what is known before anybody answered", () => {
		const values = entryValues(form, [], show);
		expect(values).toMatchObject({ "planting-p1.bearing_trees": "40", "planting-p2.harvested": "" });
	});

	test("say again what was read from them", () => {
		const typed = {
			...noLoss,
			"planting-p1.harvested": "?",
			"next_year.comment": "Hail in May",
			"next_year.bud_set": "light",
		};
		const { answers } = readEntry(form, typed, settings);
		const again = readEntry(form, entryValues(form, answers, show), settings);
		expect(again).toEqual({ answers, problems: [], checks: [] });
		expect(entryValues(form, answers, show)["planting-p1.harvested"]).toBe("?");
	});
});
