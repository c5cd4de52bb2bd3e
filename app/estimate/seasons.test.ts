import { describe, expect, test } from "vitest";
import { compareToSeasons, meanOfSeasons } from "#app/estimate/seasons.ts";

const figure = (value: number, standardError = 0) => ({ value, standardError });

describe("a mean of seasons", () => {
	test("each season counts alike and a missing one shortens the list", () => {
		expect(meanOfSeasons([figure(2, 3), null, figure(6, 4)])).toEqual({ value: 4, standardError: 2.5, seasons: 2 });
		expect(meanOfSeasons([null, null])).toBeNull();
		expect(compareToSeasons(figure(1), [])).toBeNull();
	});

	test("this season as the only one of its mean does not differ, for certain", () => {
		const { difference, standardErrorsApart } = compareToSeasons(figure(5, 2), [figure(5, 2)], { isOneOfThem: true })!;
		expect(difference).toEqual(figure(0, 0));
		expect(standardErrorsApart).toBeNull();
	});

	test("a mean of 0 has no relative difference", () => {
		expect(compareToSeasons(figure(5, 2), [figure(0), figure(0)])?.relative).toBeNull();
	});

	test("what is no figure is refused", () => {
		expect(() => meanOfSeasons([figure(Number.NaN)])).toThrow(RangeError);
		expect(() => compareToSeasons(figure(1, -1), [figure(1)])).toThrow(RangeError);
	});
});
