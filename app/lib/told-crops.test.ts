import { expect, test } from "vitest";
import { readyForms } from "#app/collect/forms/ready-forms.ts";
import { toldCrops } from "./told-crops.ts";

const crops = ["apple", "tart_cherry"];
const once = (form: (typeof readyForms)[keyof typeof readyForms], cropKeys = crops) =>
	form.measures.filter((measure) => toldCrops(measure, form.screens, cropKeys).length === 0).map(({ key }) => key);

test("what is asked once of an operation is told of no crop by itself", () => {
	expect(once(readyForms.after_harvest)).toEqual(["freeze_loss", "first_harvest", "last_harvest"]);
	expect(once(readyForms.bloom_watch)).toEqual(["poor_bee_weather"]);
	expect(once(readyForms.after_freeze)).toEqual(["protected"]);
});

test("in a survey of one crop all of it is about that crop", () => {
	expect(once(readyForms.after_harvest, ["apple"])).toEqual([]);
});

test("a measure of some crops is told of those that the survey asks about", () => {
	const { measures, screens } = readyForms.pests;
	const curculio = measures.find(({ key }) => key === "plum_curculio_seen")!;
	expect(toldCrops(curculio, screens, ["apple", "plum", "aronia"])).toEqual(["apple", "plum"]);
});
