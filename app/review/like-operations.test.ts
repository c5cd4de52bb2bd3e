import { describe, expect, test } from "vitest";
import { isOdd, logSpreadOf, robustScore } from "#app/review/like-operations.ts";

const yields = [20_000, 22_000, 19_000, 21_000, 23_000, 18_500, 220_000];

describe("distance from like operations", () => {
	test("a tenfold answer stands out and the others do not", () => {
		const spread = logSpreadOf(yields);
		expect(yields.map((value) => isOdd(robustScore(value, spread)))).toEqual([...Array(6).fill(false), true]);
	});

	test("the unit does not matter", () => {
		const [pounds, tons] = [logSpreadOf(yields), logSpreadOf(yields.map((value) => value / 2000))];
		expect(robustScore(11, tons)).toBeCloseTo(robustScore(22_000, pounds)!, 10);
	});

	test("zeros and blanks are neither used nor scored", () => {
		const spread = logSpreadOf([...yields, 0, null]);
		expect(spread?.used).toBe(7);
		expect(robustScore(0, spread)).toBeNull();
		expect(robustScore(null, spread)).toBeNull();
	});

	test("three values are too few, and all alike have no spread", () => {
		expect(logSpreadOf([1, 2, 3, 0])).toBeNull();
		expect(robustScore(2, null)).toBeNull();
		expect(robustScore(7, logSpreadOf([7, 7, 7, 7]))).toBeNull();
	});

	test("where most gave one value the mean deviation judges the rest", () => {
		const spread = logSpreadOf([500, 500, 500, 500, 500, 50_000]);
		expect(robustScore(50_000, spread, "no_score")).toBeNull();
		expect(isOdd(robustScore(50_000, spread))).toBe(true);
	});
});
