import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Condition, type ConditionValue, evaluate, type Known, questionsIn } from "./condition.ts";

const known = (
	values: Record<string, ConditionValue | null>,
	rows: Record<string, ConditionValue | null>[] = [],
): Known => ({
	value: (key) => values[key],
	rows: rows.map((row) => (key) => row[key]),
});
const less: Condition = { compare: "<", question: "harvested", to: { question: "normal_crop" } };

describe("rows of the planting table", () => {
	test("one row is enough", () => {
		const rows = [
			{ harvested: 5, normal_crop: 5 },
			{ harvested: 4, normal_crop: 5 },
		];
		expect(evaluate({ any_planting: less }, known({}, rows))).toBe(true);
	});
	test("an unknown row leaves the answer open unless another decides it", () => {
		const open = { harvested: null, normal_crop: 5 };
		expect(evaluate({ any_planting: less }, known({}, [open, { harvested: 5, normal_crop: 5 }]))).toBe(null);
		expect(evaluate({ any_planting: less }, known({}, [open, { harvested: 1, normal_crop: 5 }]))).toBe(true);
	});
	test("no row, no loss", () => expect(evaluate({ any_planting: less }, known({}))).toBe(false));
});

describe("values", () => {
	test("days and options compare as texts", () => {
		const at = known({ first: "2026-09-02", last: "2026-09-01", bud_set: "light" });
		expect(evaluate({ compare: "<", question: "last", to: { question: "first" } }, at)).toBe(true);
		expect(evaluate({ compare: "=", question: "bud_set", to: { value: "light" } }, at)).toBe(true);
	});
	test("of several choices one is looked for", () => {
		const at = known({ seen: ["scab", "mites"] });
		expect(evaluate({ compare: "=", question: "seen", to: { value: "mites" } }, at)).toBe(true);
		expect(evaluate({ compare: "!=", question: "seen", to: { value: "mites" } }, at)).toBe(false);
		expect(evaluate({ compare: "<", question: "seen", to: { value: "mites" } }, at)).toBe(null);
	});
	test("a number beside a text is not known", () => {
		expect(evaluate({ compare: "=", question: "a", to: { value: "1" } }, known({ a: 1 }))).toBe(null);
	});
	test("zero is known", () =>
		expect(evaluate({ compare: "=", question: "a", to: { value: 0 } }, known({ a: 0 }))).toBe(true));
});

const leaf = fc.record({
	compare: fc.constantFrom("<" as const, "<=" as const, "=" as const, "!=" as const, ">=" as const, ">" as const),
	question: fc.constantFrom("a", "b", "c"),
	to: fc.oneof(
		fc.record({ value: fc.oneof(fc.integer({ min: -2, max: 2 }), fc.constantFrom("x", "y")) }),
		fc.record({ question: fc.constantFrom("a", "b", "c") }),
	),
});
const conditions = fc.letrec<{ tree: Condition }>((tie) => ({
	tree: fc.oneof(
		{ maxDepth: 3 },
		leaf as fc.Arbitrary<Condition>,
		fc.record({ all: fc.array(tie("tree"), { minLength: 1, maxLength: 3 }) }),
		fc.record({ any: fc.array(tie("tree"), { minLength: 1, maxLength: 3 }) }),
		fc.record({ not: tie("tree") }),
		fc.record({ any_planting: leaf as fc.Arbitrary<Condition> }),
	),
})).tree;
const values = fc.record({
	a: fc.option(fc.integer({ min: -2, max: 2 })),
	b: fc.option(fc.integer({ min: -2, max: 2 })),
	c: fc.option(fc.constantFrom("x", "y")),
});

test("not twice is the same, and De Morgan's laws hold with unknowns too", () => {
	fc.assert(
		fc.property(conditions, conditions, values, fc.array(values, { maxLength: 3 }), (one, two, told, rows) => {
			const at = known(told, rows);
			expect(evaluate({ not: { not: one } }, at)).toBe(evaluate(one, at));
			expect(evaluate({ not: { all: [one, two] } }, at)).toBe(evaluate({ any: [{ not: one }, { not: two }] }, at));
		}),
	);
});

test("what is decided stays decided when more becomes known", () => {
	fc.assert(
		fc.property(conditions, values, values, (condition, told, more) => {
			const before = evaluate(condition, known(told));
			const filled = Object.fromEntries(
				Object.entries(told).map(([key, value]) => [key, value ?? more[key as keyof typeof more]]),
			);
			if (before !== null) expect(evaluate(condition, known(filled))).toBe(before);
		}),
	);
});

test("a condition names its questions once", () => {
	expect(questionsIn({ all: [less, { not: { any_planting: less } }] })).toEqual(["harvested", "normal_crop"]);
});
