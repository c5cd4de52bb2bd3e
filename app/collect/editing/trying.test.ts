import { expect, test } from "vitest";
import { readyForms } from "../forms/ready-forms.ts";
import { draftOfDefinition } from "./draft.ts";
import { shownDefinition } from "./fill-gaps.ts";
import { samplePlantings } from "./sample-plantings.ts";
import { goOn, startTrying, type Tried } from "./trying.ts";

const settings = { language: "en", season: 2026, today: "2026-11-20" } as const;
const plantings = samplePlantings([{ cropKey: "apple", plantKind: "tree", bushelLb: 42 }]);
const definition = shownDefinition(draftOfDefinition(readyForms.after_harvest));
const first = startTrying({ definition, plantings, answers: [] }, settings);

/** Answers the screen that is shown. */
function answer(tried: Tried, values: Record<string, string>): Tried {
	if (tried.at !== "screen") throw new Error(tried.at);
	const trying = { definition, plantings, answers: tried.answers };
	return goOn(trying, tried.shown.step.key, values, settings);
}
const numbers = { bearing_trees: "100", normal_crop: "1000", normal_crop_unit: "lb", harvested_unit: "lb" };

test("a screen that lacks an answer is shown again with what is to be mended and what was typed", () => {
	const again = answer(first, { ...numbers, harvested: "" });
	expect(again).toMatchObject({
		at: "screen",
		answers: [],
		posted: { problems: [{ field: "harvested", code: "empty" }] },
	});
});

test("odd answers are asked about once, and go on when they are confirmed", () => {
	const asked = answer(first, { ...numbers, harvested: "5000" });
	expect(asked).toMatchObject({ at: "screen", shown: { checks: [{ key: "picked_far_above_normal" }] } });
	const next = answer(asked, { ...numbers, harvested: "5000", confirm: "picked_far_above_normal" });
	// Nothing was lost, so that no cause of loss is asked.
	expect(next).toMatchObject({ at: "screen", shown: { step: { key: "harvest_days" } } });
});

test("the end is a review of what was answered, and an orchard without plantings meets fewer screens", () => {
	let tried = answer(first, { ...numbers, harvested: "1000" });
	for (let n = 0; n < 5 && tried.at === "screen"; n++) tried = answer(tried, {});
	expect(tried).toMatchObject({ at: "review", hindrance: undefined });
	const bare = startTrying({ definition, plantings: [], answers: [] }, settings);
	expect(bare).toMatchObject({ at: "screen", shown: { step: { planting: null } } });
});
