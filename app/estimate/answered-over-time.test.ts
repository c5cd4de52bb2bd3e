import { describe, expect, test } from "vitest";
import { daysToTell, sharesByDay } from "./answered-over-time.ts";

describe("the share that has answered", () => {
	test("grows from day to day, and stays where nobody answers", () => {
		const days = [
			{ day: 0, answered: 2 },
			{ day: 3, answered: 1 },
		];
		expect(sharesByDay(days, 4, 4)).toEqual([
			{ day: 0, share: 0.5 },
			{ day: 1, share: 0.5 },
			{ day: 2, share: 0.5 },
			{ day: 3, share: 0.75 },
			{ day: 4, share: 0.75 },
		]);
	});

	test("does not depend on the order of the days, nor on how a day is divided", () => {
		const whole = [
			{ day: 1, answered: 5 },
			{ day: 2, answered: 4 },
		];
		const parts = [
			{ day: 2, answered: 4 },
			{ day: 1, answered: 3 },
			{ day: 1, answered: 2 },
		];
		expect(sharesByDay(parts, 20, 3)).toEqual(sharesByDay(whole, 20, 3));
	});

	test("tells what was taken in after the closing with the last day", () => {
		expect(sharesByDay([{ day: 9, answered: 1 }], 2, 1)).toEqual([
			{ day: 0, share: 0 },
			{ day: 1, share: 0.5 },
		]);
	});

	test("is none where nobody may belong", () => {
		expect(sharesByDay([], 0, 5)).toEqual([]);
		expect(() => sharesByDay([], -1, 5)).toThrow(RangeError);
	});
});

describe("the days of the table", () => {
	test.each([
		[0, 5, [0]],
		[1, 5, [0, 1]],
		[4, 5, [0, 1, 2, 3, 4]],
		[20, 5, [0, 5, 10, 15, 20]],
		[30, 4, [0, 10, 20, 30]],
	])("of %i, at most %i, are %j", (last, most, days) => {
		expect(daysToTell(last, most)).toEqual(days);
	});

	test("are each told once and in order, with both ends", () => {
		for (let last = 0; last < 80; last++) {
			const days = daysToTell(last, 12);
			expect(days.length).toBeLessThanOrEqual(12);
			expect(days).toEqual([...new Set(days)].toSorted((a, b) => a - b));
			expect([days[0], days.at(-1)]).toEqual([0, last]);
		}
	});
});
