import { describe, expect, test } from "vitest";
import type { Answer } from "#app/collect/form.ts";
import { afterHarvest } from "#app/collect/forms/after-harvest.ts";
import { factsOf } from "./facts.ts";

const given = (questionKey: string, value: number, plantingId: string | null = null): Answer => ({
	questionKey,
	plantingId,
	kind: "given",
	value,
	given: { text: String(value) },
});
const silent = (questionKey: string, kind: "dont_know" | "refused", plantingId: string | null = null): Answer => ({
	questionKey,
	plantingId,
	kind,
	value: null,
	given: null,
});
const planting = (plantingId: string, trees: number, normal: number, harvested: number): Answer[] => [
	given("bearing_trees", trees, plantingId),
	given("normal_crop", normal, plantingId),
	given("harvested", harvested, plantingId),
];
const plantings = [
	{ plantingId: "p1", cropKey: "apple" },
	{ plantingId: "p2", cropKey: "apple" },
	{ plantingId: "p3", cropKey: "plum" },
];
const whole = [...planting("p1", 40, 4000, 1000), ...planting("p2", 10, 1000, 0), ...planting("p3", 20, 1000, 1200)];

const factOf = (answers: Answer[], measureKey: string, cropKey: string) => {
	const fact = factsOf(afterHarvest, { plantings, answers }).find(
		(row) => row.measureKey === measureKey && row.cropKey === cropKey,
	);
	return fact && [fact.y, fact.x];
};

describe("sums", () => {
	test("plantings of a crop are summed first, then all crops", () => {
		expect(factOf(whole, "crop_loss", "apple")).toEqual([4000, 5000]);
		expect(factOf(whole, "crop_loss", "plum")).toEqual([-200, 1000]);
		expect(factOf(whole, "crop_loss", "all")).toEqual([3800, 6000]);
		expect(factOf(whole, "base.bearing_trees", "all")).toEqual([70, 1]);
	});
	test("yield per tree is not summed over crops", () => {
		expect(factOf(whole, "yield_per_tree", "apple")).toEqual([1000, 50]);
		expect(factOf(whole, "yield_per_tree", "all")).toBeUndefined();
	});
	test("an operation without plantings has no facts", () => {
		expect(factsOf(afterHarvest, { plantings: [], answers: [] })).toEqual([]);
	});
});

describe("indicators", () => {
	test("a whole loss is told of the crop's sum, not of one planting", () => {
		expect(factOf(whole, "total_loss", "apple")).toEqual([0, 1]);
		const lost = [...planting("p1", 40, 4000, 0), ...planting("p2", 10, 1000, 0), ...planting("p3", 20, 1000, 1200)];
		expect(factOf(lost, "total_loss", "apple")).toEqual([1, 1]);
		expect(factOf(lost, "total_loss", "all")).toEqual([0, 1]);
	});
});

describe("shares", () => {
	test("a cause takes its share of what was lost, and a gain is no negative loss", () => {
		const answers = [...whole, given("cause_freeze", 75), given("cause_hail_wind", 25)];
		expect(factOf(answers, "freeze_loss", "apple")).toEqual([3000, 5000]);
		expect(factOf(answers, "freeze_loss", "plum")).toEqual([0, 1000]);
	});
	test("a cause left blank took nothing where the others make a hundred", () => {
		expect(factOf([...whole, given("cause_disease", 100)], "freeze_loss", "apple")).toEqual([0, 5000]);
	});
	test("causes that were skipped, not known or refused give no fact", () => {
		expect(factOf(whole, "freeze_loss", "apple")).toBeUndefined();
		expect(factOf([...whole, silent("cause_freeze", "dont_know")], "freeze_loss", "apple")).toBeUndefined();
		expect(factOf([...whole, silent("cause_freeze", "refused")], "freeze_loss", "apple")).toBeUndefined();
	});
	test("causes that were not asked, since nothing was lost, took nothing", () => {
		const full = [
			...planting("p1", 40, 4000, 4000),
			...planting("p2", 10, 1000, 1000),
			...planting("p3", 20, 900, 950),
		];
		expect(factOf(full, "freeze_loss", "apple")).toEqual([0, 5000]);
	});
});

describe("four kinds of silence", () => {
	test.each([
		["not known", [silent("harvested", "dont_know", "p2")]],
		["refused", [silent("harvested", "refused", "p2")]],
		["not asked", []],
	])("a harvest that is %s makes no fact of its crop but leaves the others", (_kind, instead) => {
		const answers = whole.filter((answer) => !(answer.plantingId === "p2" && answer.questionKey === "harvested"));
		const told = [...answers, ...instead];
		expect(factOf(told, "crop_loss", "apple")).toBeUndefined();
		expect(factOf(told, "crop_loss", "all")).toBeUndefined();
		expect(factOf(told, "crop_loss", "plum")).toEqual([-200, 1000]);
		expect(factOf(told, "base.bearing_trees", "apple")).toEqual([50, 1]);
	});
	test("a harvest of zero is an answer", () => {
		expect(factOf(whole, "base.harvested_lb", "apple")).toEqual([1000, 1]);
	});
});
