import * as fc from "fast-check";
import { expect, test } from "vitest";
import { dateOfDay, dayOfDate, daysInYear } from "#app/lib/day-of-year.ts";

test("leap years: by 4, not by 100, by 400", () => {
	expect([2023, 2024, 2000, 2100].map(daysInYear)).toEqual([365, 366, 366, 365]);
});

test("a day and its date undo each other", () => {
	fc.assert(
		fc.property(fc.integer({ min: 1900, max: 2200 }), fc.integer({ min: 1, max: 366 }), (year, day) => {
			const date = dateOfDay(year, day);
			expect(date === null).toBe(day > daysInYear(year));
			if (date) expect(dayOfDate(date)).toBe(day);
		}),
	);
});

test("after February a leap year's days are one higher", () => {
	expect(["2023-02-28", "2024-02-28"].map(dayOfDate)).toEqual([59, 59]);
	expect(["2023-03-01", "2024-03-01"].map(dayOfDate)).toEqual([60, 61]);
});

test("days and dates that are none", () => {
	expect([0, 366, 110.5, -1].map((day) => dateOfDay(2023, day))).toEqual([null, null, null, null]);
	expect(["2023-02-29", "2023-13-01", "2023-2-1", "soon", ""].map(dayOfDate)).toEqual(Array(5).fill(null));
	expect(() => dateOfDay(2023.5, 1)).toThrow(RangeError);
});
