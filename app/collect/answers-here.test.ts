import { expect, test } from "vitest";
import { withTyped } from "./answers-here.ts";
import { listOpenChecks } from "./checks.ts";
import { afterHarvest } from "./forms/after-harvest.ts";
import { emptyOutbox, type Outbox, refused, type } from "./outbox.ts";
import type { StepValues } from "./posted.ts";
import type { Asking, PlantingAsked } from "./steps.ts";

const planting: PlantingAsked = {
	plantingId: "p1",
	cropKey: "apple",
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 42,
};
const told: Asking = { definition: afterHarvest, plantings: [planting], answers: [] };
const day = { season: 2031, today: "2031-12-01" };
const pounds = (harvested: string, more: StepValues = {}): StepValues => ({
	bearing_trees: "40",
	normal_crop: "4000",
	normal_crop_unit: "lb",
	harvested,
	harvested_unit: "lb",
	...more,
});

function typed(outbox: Outbox, stepKey: string, values: StepValues, language: "en" | "es" = "en"): Outbox {
	const changeId = `${stepKey}-${outbox.count}`;
	return type(outbox, stepKey, { values, language, seen: 0, changeId, from: null }).outbox;
}
const valuesIn = (outbox: Outbox, before = told) =>
	Object.fromEntries(withTyped(before, outbox, day).answers.map(({ questionKey, value }) => [questionKey, value]));

test("what was typed takes the place of what the server last told, step by step", () => {
	const before = { ...told, answers: withTyped(told, typed(emptyOutbox, "planting-p1", pounds("100")), day).answers };
	const outbox = typed(typed(emptyOutbox, "planting-p1", pounds("200")), "next_year", { bud_set: "light" });
	expect(valuesIn(outbox, before)).toEqual({
		bearing_trees: 40,
		normal_crop: 4000,
		harvested: 200,
		bud_set: "light",
	});
});

test("what cannot be read leaves the answer that was there, and numbers are read in their own language", () => {
	const before = { ...told, answers: withTyped(told, typed(emptyOutbox, "planting-p1", pounds("100")), day).answers };
	expect(valuesIn(typed(emptyOutbox, "planting-p1", pounds("2 what")), before)).toMatchObject({ harvested: 100 });
	expect(valuesIn(typed(emptyOutbox, "planting-p1", pounds("12,5"), "es"))).toMatchObject({ harvested: 12.5 });
});

test("what the server will never take does not count", () => {
	const outbox = typed(emptyOutbox, "planting-p1", pounds("100"));
	expect(valuesIn(refused(outbox, "planting-p1", "planting-p1-0"))).toEqual({});
});

test("odd answers that were confirmed without signal are confirmed, at the phone and when they arrive", () => {
	const many = pounds("100", { bearing_trees: "150000" });
	const asked = listOpenChecks(withTyped(told, typed(emptyOutbox, "planting-p1", many), day)).map(({ key }) => key);
	expect(asked.length).toBeGreaterThan(0);
	const confirmed = typed(emptyOutbox, "planting-p1", { ...many, confirm: asked.join(" ") });
	expect(listOpenChecks(withTyped(told, confirmed, day))).toEqual([]);
});
