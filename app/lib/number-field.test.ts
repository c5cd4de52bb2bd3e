import { expect, test } from "vitest";
import { numberField } from "./number-field.ts";

const read = (typed: string, whole: boolean) => {
	const { data, error } = numberField(1, 100_000, whole).safeParse(typed);
	return error ? error.issues[0]!.message : data;
};

test("a whole number is read with the groups that tables show, and is never a thousandth of it", () => {
	expect(["1000", "1,000", "1.000", "12 500", "100,000"].map((typed) => read(typed, true))).toEqual([
		1000, 1000, 1000, 12_500, 100_000,
	]);
	expect(["1.5", "1,5", "abc"].map((typed) => read(typed, true))).toEqual(["not_whole", "not_whole", "not_a_number"]);
});

test("another number has a point or a comma before its decimals", () => {
	expect(["12.5", "12,5", " 7 ", ""].map((typed) => read(typed, false))).toEqual([12.5, 12.5, 7, "not_a_number"]);
});
