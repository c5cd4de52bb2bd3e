import { expect, test } from "vitest";
import { addTallies, emptyMoments, respondentsByStratum, tallyOf } from "#app/tally/tally.ts";

test("a stratum's respondents are counted over all its counties", () => {
	const rows = [
		{ stratumKey: "55|small", n: 4 },
		{ stratumKey: "55|large", n: 1 },
		{ stratumKey: "55|small", n: 3 },
	];
	expect([...respondentsByStratum(rows)]).toEqual([
		["55|small", 7],
		["55|large", 1],
	]);
	expect(respondentsByStratum([]).size).toBe(0);
});

test("a new answer is an increment", () => {
	const before = tallyOf([
		{ y: 10, x: 100 },
		{ y: 30, x: 100 },
	]);
	const after = addTallies(before, tallyOf([{ y: 20, x: 400 }]));
	expect(after).toEqual({ n: 3, sumY: 60, sumX: 600, mYY: 200, mXX: 60_000, mXY: 0 });
	expect(addTallies(before, emptyMoments)).toEqual(before);
});
