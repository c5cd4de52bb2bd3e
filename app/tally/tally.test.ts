import { expect, test } from "vitest";
import { addTallies, emptyMoments, tallyOf } from "#app/tally/tally.ts";

test("a new answer is an increment", () => {
	const before = tallyOf([
		{ y: 10, x: 100 },
		{ y: 30, x: 100 },
	]);
	const after = addTallies(before, tallyOf([{ y: 20, x: 400 }]));
	expect(after).toEqual({ n: 3, sumY: 60, sumX: 600, mYY: 200, mXX: 60_000, mXY: 0 });
	expect(addTallies(before, emptyMoments)).toEqual(before);
});
