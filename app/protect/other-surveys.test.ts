import { describe, expect, test } from "vitest";
import { REGION } from "./codes.ts";
import type { Holding } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { guardSurveys, type OtherSurvey } from "./other-surveys.ts";
import { protect } from "./protect.ts";
import { defaultRules } from "./rules.ts";

const areas = ["c1", "c2", "c3", "c4"].map((areaKey) => ({ areaKey, parentKey: REGION }));
const rules = { ...defaultRules, minimumOwners: 5 };
const cropKeys = ["apple"];
/** By county, what each of its owners has; the same owner has the same place in the list. */
type Trees = Record<string, (number | null)[]>;
const holdingsOf = (trees: Trees): Holding[] =>
	Object.entries(trees).flatMap(([areaKey, amounts]) =>
		amounts.flatMap((amount, at) =>
			amount === null ? [] : [{ owner: `${areaKey}-${at}`, areaKey, cropKey: "apple", amounts: { trees: amount } }],
		),
	);
const many = (each: number, count = 9) => Array.from({ length: count }, () => each);
const both = (...counties: string[]) => counties.flatMap((county) => [`${county}|apple`, `${county}|all`]);

function other(trees: Trees, shown: string[], more: Partial<OtherSurvey> = {}): OtherSurvey {
	const quantities = { quantities: ["trees"], shared: ["trees"] };
	return {
		name: "7",
		shown: new Set(shown),
		holdings: holdingsOf(trees),
		areas,
		cropKeys,
		rules,
		...quantities,
		...more,
	};
}

function guard(trees: Trees, ...others: OtherSurvey[]) {
	return guardSurveys({ areas, rules, holdings: holdingsOf(trees), others });
}

async function beside(trees: Trees, ...others: OtherSurvey[]) {
	const holdings = holdingsOf(trees);
	const table = tableOfHoldings({ areas, cropKeys, quantities: ["trees"], rules, holdings });
	const surveys = { areas, cropKeys, quantities: ["trees"], rules, holdings, earlier: [], others };
	const { pattern, audit } = await protect(table, rules, { surveys });
	const shown = areas.flatMap(({ areaKey }) => (pattern.get(`${areaKey}|apple`)!.status === "shown" ? [areaKey] : []));
	return { pattern, audit, shown };
}

describe("of a cell that another survey shows", () => {
	test("the value is told where the same owners gave the same answers, whoever else differs elsewhere", () => {
		const here = { c1: many(90), c2: many(50) };
		expect(guard(here, other({ ...here, c2: many(60) }, both("c1", "c2"))).told.get("trees")).toEqual(
			new Set(both("c1")),
		);
	});

	test("it is reckoned where fewer than five differ, and free where five do", () => {
		const differing = (count: number) => ({ c1: many(90).map((trees, at) => (at < count ? 80 : trees)) });
		expect(guard({ c1: many(90) }, other(differing(4), both("c1"))).reckoned.get("trees")).toEqual(new Set(both("c1")));
		const free = guard({ c1: many(90) }, other(differing(5), both("c1")));
		expect([free.told.size, free.reckoned.size, free.keptBack.size]).toEqual([0, 0, 0]);
	});

	test("it is kept back where it would tell of one owner or two who answered one survey alone", () => {
		const here = { c1: many(90) };
		const without = (count: number) => ({ c1: many(90).map((trees, at) => (at < count ? null : trees)) });
		expect(guard(here, other(without(1), both("c1", REGION))).keptBack.get("c1|apple")).toEqual({ trees: 9 });
		expect(guard(here, other(without(2), both("c1", REGION))).keptBack.size).toBe(4);
		expect(guard(here, other(without(3), both("c1", REGION))).keptBack.size).toBe(0);
	});

	test("nothing is said where the quantity has another unit or another meaning", () => {
		const here = { c1: many(90) };
		const found = guard(here, other(here, both("c1"), { shared: [] }));
		expect([found.told.size, found.reckoned.size, found.keptBack.size]).toEqual([0, 0, 0]);
	});

	test("the network's cell is another one where the other survey also asked elsewhere", () => {
		const here = { c1: many(90) };
		const wider = other({ ...here, c9: many(40) }, both("c1", REGION), {
			areas: [...areas, { areaKey: "c9", parentKey: REGION }],
		});
		expect(guard(here, wider).told.get("trees")).toEqual(new Set(both("c1")));
	});
});

test("a cell that another survey withheld is kept back with the room that it asked for there", () => {
	// One large grower dominated there; here so many others answered that nobody does.
	const there = { c1: [900, 20, 20, 20, 20], c2: many(50) };
	const here = { c1: [900, 20, 20, 20, 20, 300, 200], c2: many(50) };
	const found = guard(here, other(there, both("c2")));
	expect(found.keptBack.get("c1|apple")!.trees).toBeCloseTo(90 - 60);
	expect(found.told.get("trees")).toEqual(new Set(both("c2")));
});

// c1 has one grower. Alone, the cheapest shield is c2.
const farms = { c1: [500], c2: many(90, 8), c3: many(100), c4: many(150) };

test("a withheld county that another survey's figure of its shield would tell gets another shield", async () => {
	expect((await beside(farms)).shown).toEqual(["c3", "c4"]);
	// There c1 and c3 were withheld: c2 is known from there, so that c1 would be the rest.
	const { shown, audit } = await beside(farms, other(farms, both("c2", "c4", REGION)));
	expect(audit.passed).toBe(true);
	expect(shown).toEqual(["c2", "c4"]);
	expect(audit.attackers.at(-1)).toMatchObject({ kind: "survey", failed: 0 });
});

test("so it does where only those could tell who answered the other survey otherwise", async () => {
	const there = { ...farms, c2: [80, 80, 80, ...many(90, 5)], c3: [...many(100, 6), 70, 70, 70] };
	const { shown, audit } = await beside(farms, other(there, both("c2", "c4")));
	expect(audit.passed).toBe(true);
	expect(shown).not.toContain("c1");
	expect(shown).not.toContain("c3");
});

test("a county that this survey could show stays withheld while another survey withholds the same answers", async () => {
	const there = { c1: [500, 400], c2: many(90, 8), c3: many(100), c4: many(150) };
	const here = { ...there, c1: [500, 400, 30, 30, 30] };
	expect((await beside(here)).shown).toContain("c1");
	const { shown, pattern, audit } = await beside(here, other(there, both("c3", "c4", REGION)));
	expect(audit.passed).toBe(true);
	expect(shown).not.toContain("c1");
	expect(pattern.get("c1|apple")!.reasons).toEqual(["other_survey"]);
});

test("what other releases told already blocks no draft: it withholds as if it were alone", async () => {
	const open = other(farms, both("c1", "c2", "c3", "c4", REGION));
	const { shown, audit } = await beside(farms, open);
	expect(audit.failures).toEqual([]);
	expect(shown).not.toContain("c1");
});
