import { expect, test } from "vitest";
import { districtProblems, districtsOf, nameDistricts } from "./districts.ts";

const nameOfCounty = new Map(["a", "b", "c", "d", "e"].map((county) => [county, county.toUpperCase()]));
const made = (county: string) => `${county} area`;

test("counties with one name beside them are one district", () => {
	const names = new Map([
		["b", "North"],
		["a", "South"],
		["c", "South"],
	]);
	expect(districtsOf(names)).toEqual([
		{ name: "South", counties: ["a", "c"] },
		{ name: "North", counties: ["b"] },
	]);
});

test("a group keeps the name of the district that most of it was in, and each name is given once", () => {
	const now = new Map([
		["a", "North"],
		["b", "North"],
		["c", "North"],
		["d", "South"],
	]);
	const named = nameDistricts([["a"], ["b", "c"], ["d", "e"]], now, nameOfCounty, made);
	expect([...named]).toEqual([
		["b", "North"],
		["c", "North"],
		["d", "South"],
		["e", "South"],
	]);
	const halves = nameDistricts(
		[
			["a", "b"],
			["c", "e"],
		],
		now,
		nameOfCounty,
		made,
	);
	expect(Object.fromEntries(halves)).toEqual({ a: "North", b: "North", c: "C area", e: "C area" });
});

test("a district of one county, and one whose counties do not touch, are told beside each of their counties", () => {
	const neighborsOf = new Map([
		["a", ["b"]],
		["b", ["a", "c"]],
		["c", ["b"]],
	]);
	const problems = (...names: [string, string][]) => districtProblems(new Map(names), neighborsOf);
	expect(problems(["a", "North"], ["b", "North"])).toEqual([]);
	expect(problems(["a", "North"])).toEqual([{ field: "district.a", code: "district_single" }]);
	expect(problems(["a", "North"], ["c", "North"])).toEqual([
		{ field: "district.a", code: "district_apart" },
		{ field: "district.c", code: "district_apart" },
	]);
});
