import { expect, test } from "vitest";
import { type DraftFigure, publishedFigure, respondentsBand } from "#app/release/draft.ts";

const figure: DraftFigure = {
	measureKey: "crop_loss",
	value: 41.46,
	standardError: 2.14159,
	cv: 0.075777,
	lower: 35.302,
	upper: 47.618,
	steadiness: "steady",
};

test("an interval is rounded outwards and its value to the nearest", () => {
	expect(publishedFigure(figure, 0)).toMatchObject({ value: 41, lower: 35, upper: 48, standardError: 2.14 });
	expect(publishedFigure(figure, 1)).toMatchObject({ value: 41.5, lower: 35.3, upper: 47.7 });
});

test("an end that is whole up to a rounding error stays where it is", () => {
	expect(publishedFigure({ ...figure, lower: 14.000000000000002, upper: 29.999999999999996 }, 0)).toMatchObject({
		lower: 14,
		upper: 30,
	});
	expect(publishedFigure({ ...figure, lower: 0.1 + 0.2, upper: 0.1 + 0.2 }, 1)).toMatchObject({
		lower: 0.3,
		upper: 0.3,
	});
});

test("a rough figure keeps its place and loses every number", () => {
	const rough = publishedFigure({ ...figure, steadiness: "rough" }, 0);
	expect(Object.values(rough).filter((value) => typeof value === "number")).toEqual([]);
	expect(rough).toMatchObject({ measureKey: "crop_loss", steadiness: "rough" });
});

test("every count of three or more has one band that holds it, and fewer have none", () => {
	for (let n = 3; n < 700; n++) {
		const [first, last] = respondentsBand(n).split("-");
		expect(n).toBeGreaterThanOrEqual(Number.parseInt(first!, 10));
		if (last) expect(n).toBeLessThanOrEqual(Number(last));
	}
	expect(() => respondentsBand(2)).toThrow(RangeError);
});

test("a day keeps its quartiles unless it is rough, and its interval is whole days", () => {
	const bloom = { ...figure, value: 115, cv: null, lower: 112, upper: 118, quartiles: { first: 111, third: 119 } };
	expect(publishedFigure(bloom, 0)).toMatchObject({ value: 115, lower: 112, upper: 118, quartiles: bloom.quartiles });
	expect(publishedFigure({ ...bloom, steadiness: "rough" }, 0)).not.toHaveProperty("quartiles");
});
