import { expect, test } from "vitest";
import type { ReleaseRules } from "./draft.ts";
import { agreementTo, changesOf, looseningOf, movesBetween } from "./rules-change.ts";

const start: ReleaseRules = {
	minimumOwners: 5,
	dominancePercent: 10,
	largest: { owners: 2, percent: 75 },
	publicFactor: 3,
	steadyCv: 0.15,
	careCv: 0.3,
	steadyDays: 3,
	careDays: 7,
};
const loosened = (changes: Partial<ReleaseRules>, from = start) =>
	looseningOf(movesBetween(from, { ...from, ...changes })).map(({ name }) => name);

test.each<[Partial<ReleaseRules>, string[]]>([
	[{ minimumOwners: 4 }, ["minimumOwners"]],
	[{ minimumOwners: 6 }, []],
	[{ dominancePercent: 8 }, ["dominancePercent"]],
	[{ dominancePercent: 12 }, []],
	[{ largest: { owners: 1, percent: 75 } }, ["largestOwners"]],
	[{ largest: { owners: 3, percent: 75 } }, []],
	[{ largest: { owners: 2, percent: 80 } }, ["largestPercent"]],
	[{ largest: { owners: 2, percent: 60 } }, []],
	[{ largest: null }, ["largestPercent"]],
	[{ publicFactor: 4 }, ["publicFactor"]],
	[{ publicFactor: null }, ["publicFactor"]],
	[{ publicFactor: 2 }, []],
	[{ steadyCv: 0.2, steadyDays: 4 }, []],
	[{ careCv: 0.35 }, ["carePercent"]],
	[{ careDays: 8 }, ["careDays"]],
	[{ minimumOwners: 3, careCv: 0.5 }, ["minimumOwners", "carePercent"]],
])("of %o, what shows more than before is %o", (changes, names) => {
	expect(loosened(changes)).toEqual(names);
});

test("a rule that was not used before loosens nothing, and what did not move is no move", () => {
	const without = { ...start, largest: null, publicFactor: null };
	expect(loosened({ largest: { owners: 2, percent: 75 }, publicFactor: 3 }, without)).toEqual([]);
	expect(movesBetween(start, { ...start })).toEqual([]);
});

const agreed = (minimumOwners: number) =>
	agreementTo(looseningOf(movesBetween(start, { ...start, minimumOwners, dominancePercent: 12 })));

test("agreeing to one looser value agrees to no other", () => {
	expect(agreed(4)).toBe("minimumOwners=4");
	expect(agreed(3)).not.toBe(agreed(4));
	expect(agreed(6)).toBe("");
});

test("each change is told against the one before it, and the first against what the product starts with", () => {
	const row = (networkRulesId: number, changes: Partial<ReleaseRules>) => ({
		networkRulesId,
		rules: { ...start, ...changes },
		setBy: "Marit Osgood",
		setAt: new Date("2026-05-04T12:00:00Z"),
	});
	const told = changesOf([row(2, { minimumOwners: 6, careDays: 9 }), row(1, { minimumOwners: 6 })], start);
	expect(told.map(({ moves }) => moves)).toEqual([
		[{ name: "careDays", from: 7, to: 9 }],
		[{ name: "minimumOwners", from: 5, to: 6 }],
	]);
});
