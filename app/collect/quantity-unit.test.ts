import { expect, test } from "vitest";
import { afterHarvest } from "./forms/after-harvest.ts";
import { unitOfQuantity } from "./quantity-unit.ts";

const unitsOf = (key: string) => {
	const { numerator, denominator } = afterHarvest.measures.find((measure) => measure.key === key)!;
	return [numerator, ...(denominator ? [denominator] : [])].map((quantity) => unitOfQuantity(quantity, afterHarvest));
};

test("the two sums of a figure are told in the unit of what is added up", () => {
	expect(unitsOf("crop_loss")).toEqual(["lb", "lb"]);
	expect(unitsOf("freeze_loss")).toEqual(["lb", "lb"]);
	expect(unitsOf("yield_per_tree")).toEqual(["lb", "trees"]);
	expect(unitsOf("total_loss")).toEqual(["operations", "operations"]);
	expect(unitsOf("base.bearing_trees")).toEqual(["trees"]);
});

test("a sum of what has no unit, of a part of it, or of different things is a bare number", () => {
	const one = { question: "harvested", times: 1 };
	expect(unitOfQuantity({ terms: [{ question: "bud_set", times: 1 }] }, afterHarvest)).toBe("count");
	expect(unitOfQuantity({ terms: [{ ...one, times: 0.01 }] }, afterHarvest)).toBe("count");
	expect(unitOfQuantity({ terms: [one, { known: "bearing_trees", times: 1 }] }, afterHarvest)).toBe("count");
});
