import { expect, test } from "vitest";
import { daySteadiness, steadiness } from "#app/estimate/steadiness.ts";

const sampled = { standardError: 1, everybody: false };

test("the cut-offs themselves belong to the better word", () => {
	expect(steadiness({ ...sampled, cv: 0.15 })).toBe("steady");
	expect(steadiness({ ...sampled, cv: 0.1500001 })).toBe("care");
	expect(steadiness({ ...sampled, cv: 0.3 })).toBe("care");
	expect(steadiness({ ...sampled, cv: 0.3000001 })).toBe("rough");
});

test("no spread among a sample is not proof, and no standard error is no figure", () => {
	expect(steadiness({ cv: 0, standardError: 0, everybody: false })).toBe("care");
	expect(steadiness({ cv: null, standardError: 2, everybody: false })).toBe("care");
	expect(steadiness({ cv: 0, standardError: 0, everybody: true })).toBe("steady");
	expect(steadiness({ cv: null, standardError: null, everybody: true })).toBe("rough");
});

test("cut-offs that do not rise are refused", () => {
	expect(() => steadiness({ ...sampled, cv: 0.1 }, { steady: 0.3, care: 0.2 })).toThrow(RangeError);
	expect(() => steadiness({ ...sampled, cv: 0.1 }, { steady: 0, care: 0.2 })).toThrow(RangeError);
});

test("a day is judged by half the width of its interval, and never from fewer than five answers", () => {
	const told = { respondents: 5, everybody: false };
	expect([0, 0.5, 3, 3.5, 7, 7.5].map((halfWidth) => daySteadiness({ ...told, halfWidth }))).toEqual([
		"care",
		"steady",
		"steady",
		"care",
		"care",
		"rough",
	]);
	expect(daySteadiness({ ...told, halfWidth: null })).toBe("rough");
	expect(daySteadiness({ respondents: 4, everybody: true, halfWidth: 0 })).toBe("rough");
	expect(daySteadiness({ respondents: 5, everybody: true, halfWidth: 0 })).toBe("steady");
	expect(() => daySteadiness({ ...told, halfWidth: 1 }, { steadyDays: 7, careDays: 3 })).toThrow(RangeError);
});
