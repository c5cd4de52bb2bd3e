import { describe, expect, test } from "vitest";
import { feasibleIntervals } from "./audit.ts";
import { REGION } from "./codes.ts";
import type { Holding } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { protect } from "./protect.ts";
import { defaultRules } from "./rules.ts";
import { sharedCells } from "./shared-cells.ts";
import { loadSolver } from "./solver.ts";

const solver = await loadSolver();
const areas = ["c1", "c2", "c3", "c4"].map((areaKey) => ({ areaKey, parentKey: REGION }));
const rules = { ...defaultRules, minimumOwners: 3 };
type Grown = Record<string, number[]>;
const holdingsOf = (grown: Grown): Holding[] =>
	Object.entries(grown).flatMap(([areaKey, amounts]) =>
		amounts.map((trees, at) => ({ owner: `${areaKey}-${at}`, areaKey, cropKey: "apple", amounts: { trees } })),
	);
const tableOf = (holdings: Holding[]) =>
	tableOfHoldings({ areas, cropKeys: ["apple"], quantities: ["trees"], rules, holdings });
const both = (...counties: string[]) => counties.flatMap((area) => [`${area}|apple`, `${area}|all`]);
const beside = (there: Holding[], shown: string[], here: Holding[]) =>
	sharedCells({
		areas,
		rules,
		holdings: here,
		others: [{ name: "7", shown: new Set(shown), holdings: there, quantities: ["trees"] }],
	});
const many = (count: number, each: number) => Array.from({ length: count }, () => each);
const here = holdingsOf({ c1: many(9, 90), c2: many(9, 50) });
const changed = (count: number) => here.map((one, at) => (at < count ? { ...one, amounts: { trees: 7 } } : one));

describe("a cell that two surveys share", () => {
	test("is told where the same owners gave the same amounts and the other one shows it", () => {
		const { told, keptBack } = beside(here, ["c1|apple"], here);
		expect([...told.get("trees")!]).toEqual(["c1|apple"]);
		expect(keptBack.has("c1|apple")).toBe(false);
		// The others are withheld there: each keeps a tenth of its largest owner.
		expect(keptBack.get("c2|apple")).toEqual({ trees: 5 });
	});

	test("is not carried over where anybody differs", () => {
		const { told, keptBack } = beside(changed(1), ["c1|apple"], here);
		expect([told.size, keptBack.has("c1|all"), keptBack.has("c2|apple")]).toEqual([0, false, true]);
	});

	test("is nothing of another quantity, nor of a network that is wider there", () => {
		const acres = here.map((one) => ({ ...one, amounts: { acres: 4 } }));
		expect(beside(acres, ["c1|apple"], here)).toMatchObject({ told: new Map(), keptBack: new Map() });
		const wider = [...here, ...holdingsOf({ far: many(9, 40) })];
		expect([...beside(wider, both("c1", REGION), here).told.get("trees")!].toSorted()).toEqual(both("c1").toSorted());
		const narrower = here.filter(({ areaKey }) => areaKey === "c1");
		expect([...beside(narrower, both("c1", REGION), here).told.get("trees")!].toSorted()).toEqual(
			both("c1").toSorted(),
		);
	});
});

/*
 * By hand: c1 has one owner with 500 trees in both surveys. Bloom hid it behind c2 and showed c3 and the network, all with
 * the same answers; so it told c3's 810 trees. Then four other growers of c4 answered the harvest, and more of c2: what
 * bloom says of these two is not carried over. A harvest that hides c1 behind c3, its cheapest shield, tells
 * c1 = (c1 + c3) - 810 = 500.
 */
describe("a shield that another survey shows", () => {
	const harvest = holdingsOf({ c1: [500], c2: many(9, 200), c3: many(9, 90), c4: many(9, 150) });
	const table = tableOf(harvest);
	const bloom = harvest.map((one) =>
		one.areaKey === "c2" || one.areaKey === "c4" ? { ...one, amounts: { trees: one.amounts.trees! + 20 } } : one,
	);
	const shared = beside(bloom, both("c3"), harvest);
	/** What somebody who keeps both releases finds of c1 by the harvest's own cells. */
	const found = (pattern: Awaited<ReturnType<typeof protect>>["pattern"]) => {
		const hidden = table.cells.flatMap(({ key }, index) => (pattern.get(key)!.status === "withheld" ? [index] : []));
		const told = {
			cells: new Map([["trees", new Set(table.cells.flatMap(({ key }, i) => (both("c3").includes(key) ? [i] : [])))]]),
		};
		return feasibleIntervals(solver, table, table.quantities[0]!, new Set(hidden), told).get("c1|apple")!;
	};

	test("gives the county away where the surveys are not held against each other", async () => {
		const { pattern, audit } = await protect(table, rules);
		expect(audit.passed).toBe(true);
		expect(pattern.get("c3|apple")!.status).toBe("withheld");
		expect(found(pattern)).toEqual([500, 500]);
	});

	test("is another one where they are", async () => {
		const { pattern, audit } = await protect(table, rules, { shared });
		expect(audit).toMatchObject({ passed: true, failures: [], knownElsewhere: 0 });
		expect([pattern.get("c3|apple")!.status, pattern.get("c4|apple")!.status]).toEqual(["shown", "withheld"]);
		const [lower, upper] = found(pattern);
		expect(lower).toBeLessThanOrEqual(450);
		expect(upper).toBeGreaterThanOrEqual(550);
	});
});

const tells = (cells: string[]) => ({ told: new Map([["trees", new Set(cells)]]), keptBack: new Map() });

describe("what other surveys tell whatever is withheld here", () => {
	const harvest = holdingsOf({ c1: [500], c2: many(9, 90), c3: many(9, 100), c4: many(9, 70) });
	test("is counted, nothing more is withheld for it, and the draft is not blocked", async () => {
		const known = both("c2", "c3", "c4", REGION);
		const { pattern, audit } = await protect(tableOf(harvest), rules, { shared: tells(known) });
		expect(audit).toMatchObject({ passed: true, failures: [], knownElsewhere: 2 });
		expect(known.map((key) => pattern.get(key)!.status)).toEqual(known.map(() => "shown"));
		expect(pattern.get("c1|apple")!.status).toBe("withheld");
	});

	test("leaves the levels of all else as they were", async () => {
		const two = holdingsOf({ c1: [500], c2: [400, 30], c3: many(9, 100), c4: many(9, 70) });
		const { pattern, audit } = await protect(tableOf(two), rules, { shared: tells(both("c1")) });
		expect(audit).toMatchObject({ passed: true, knownElsewhere: 2 });
		const hidden = both("c3", "c4").filter((key) => pattern.get(key)!.status === "withheld");
		expect(hidden.length).toBeGreaterThan(0);
	});
});
