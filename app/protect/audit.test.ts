import { describe, expect, test } from "vitest";
import { auditPattern } from "./audit.ts";
import { REGION } from "./codes.ts";
import type { Holding } from "./holdings.ts";
import { ownCells } from "./levels.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { protect } from "./protect.ts";
import { defaultRules } from "./rules.ts";
import { loadSolver } from "./solver.ts";

const solver = await loadSolver();
const counties = ["c1", "c2", "c3", "c4"];
const areas = counties.map((areaKey) => ({ areaKey, parentKey: REGION }));
const rules = { ...defaultRules, minimumOwners: 3 };
type Grown = Record<string, number[]>;
const holdingsOf = (grown: Grown): Holding[] =>
	Object.entries(grown).flatMap(([areaKey, amounts]) =>
		amounts.map((lb, at) => ({ owner: `${areaKey}-${at}`, areaKey, cropKey: "apple", amounts: { lb } })),
	);
const tableOf = (holdings: Holding[]) =>
	tableOfHoldings({ areas, cropKeys: ["apple"], quantities: ["lb"], rules, holdings });

/** The audit of a pattern that withholds these counties, in apples and in all crops. */
function audit(holdings: Holding[], withheld: string[], options: Partial<Parameters<typeof auditPattern>[4]> = {}) {
	const table = tableOf(holdings);
	const own = ownCells(table, rules);
	const given = new Set(own.map(({ index }) => index));
	const shields = table.cells.flatMap(({ coordinates: [area] }, index) =>
		withheld.includes(area!) && !given.has(index) ? [index] : [],
	);
	return auditPattern(solver, table, own, new Set(shields), { ownersAttack: true, rules, ...options });
}
const kinds = ({ failures }: ReturnType<typeof audit>) => [...new Set(failures.map(({ kind }) => kind))].toSorted();
const many = (each: number) => Array.from({ length: 9 }, () => each);

/** A large county of one owner beside another that is to shield it. */
const beside = (c2: number[]) => holdingsOf({ c1: [5000], c2, c3: many(90) });

describe("an audit fails", () => {
	test("a county of one owner that is withheld alone", () => {
		expect(kinds(audit(holdingsOf({ c1: [500], c2: many(90), c3: many(90) }), []))).toContain("solved");
		expect(audit(holdingsOf({ c1: [500], c2: many(90), c3: many(90) }), ["c2"])).toMatchObject({ passed: true });
	});

	test("two single owners in one line, each of whom subtracts the own answer", () => {
		const found = audit(holdingsOf({ c1: [500], c2: [400], c3: many(90) }), []);
		expect(kinds(found)).toEqual(["by_owner", "in_line"]);
		expect(found.objectors.toSorted()).toEqual(["c1-0", "c2-0"]);
	});

	test("a shield that one of its own growers nearly fills, who then knows the county beside it", () => {
		expect(audit(beside([2400, 300, 200, 200]), ["c2"]).failures).toEqual([]);
		const nearly = beside([2400, 150, 150, 100]);
		expect(kinds(audit(nearly, ["c2"], { ownersAttack: false }))).toEqual([]);
		expect(audit(nearly, ["c2"])).toMatchObject({ passed: false, objectors: ["c2-0"] });
	});

	test("a line whose withheld cells are together too few, though nobody is alone in any", () => {
		const found = audit(
			holdingsOf({ c1: [500, 400], c2: many(90), c3: many(90) }).map((one) => one),
			["c2"],
		);
		expect(found.failures).toEqual([]);
		// One owner with two counties, each withheld with one other: three owners are enough, two are not.
		const shared = holdingsOf({ c1: [500], c2: [400], c3: many(90) });
		const same = shared.map((one) => (one.areaKey === "c2" ? { ...one, owner: "c1-0" } : one));
		expect(kinds(audit(same, []))).toEqual(["in_line"]);
	});

	test("a size that anybody can see, where it leaves less room than the level asks", () => {
		const grown = holdingsOf({ c1: [500], c2: many(90), c3: many(90) });
		expect(audit(grown, ["c2"], { told: { publicFactor: 1.2 } }).failures).toEqual([]);
		expect(kinds(audit(grown, ["c2"], { told: { publicFactor: 1.05 } }))).toContain("narrow");
	});

	test("a shield that another release tells", async () => {
		const grown = holdingsOf({ c1: [500], c2: many(90), c3: many(90) });
		const table = tableOf(grown);
		const c2 = table.cells.flatMap(({ coordinates: [area] }, index) => (area === "c2" ? [index] : []));
		const told = { cells: new Map([["lb", new Set(c2)]]) };
		expect(kinds(audit(grown, ["c2"], { told }))).toEqual(["solved"]);
		const shared = {
			told: new Map([["lb", new Set(["c2|apple", "c2|all"])]]),

			keptBack: new Map(),
		};
		const { pattern, audit: passed } = await protect(table, rules, { shared });
		expect(passed.failures).toEqual([]);
		expect([pattern.get("c2|apple")!.status, pattern.get("c3|apple")!.status]).toEqual(["shown", "withheld"]);
	});
});

describe("shields", () => {
	test("are the least that hold against a grower who nearly fills one", async () => {
		const table = tableOf(beside([2400, 150, 150, 100]));
		const { pattern, audit: passed, loss } = await protect(table, rules);
		expect(passed.failures).toEqual([]);
		expect(pattern.get("c2|apple")!.status).toBe("shown");
		expect(pattern.get("c3|apple")!.status).toBe("withheld");
		expect(loss!.lost).toBeCloseTo(loss!.bound, 9);
	});

	test("are the least where a line needs one cell more", async () => {
		const grown = holdingsOf({ c1: [500], c2: [400], c3: many(90), c4: many(70) });
		const { pattern, audit: passed, loss } = await protect(tableOf(grown), rules);
		expect(passed.failures).toEqual([]);
		expect([pattern.get("c3|apple")!.status, pattern.get("c4|apple")!.status]).toEqual(["shown", "withheld"]);
		expect(loss!.lost).toBeCloseTo(loss!.bound, 9);
	});

	test("are not added for what is known whatever is withheld, and the draft is blocked for it", async () => {
		const grown = holdingsOf({ c1: [500], c2: many(90), c3: many(90), c4: many(70) });
		const known = ["c2", "c3", "c4", REGION].flatMap((area) => [`${area}|apple`, `${area}|all`]);
		const { pattern, audit: failed } = await protect(tableOf(grown), rules, {
			guard: { told: new Set(known), keptBack: new Map() },
		});
		expect(failed.passed).toBe(false);
		expect(failed.failures.length).toBeGreaterThan(0);
		expect(failed.failures.every(({ beyondHelp, cellKey }) => beyondHelp && cellKey.startsWith("c1|"))).toBe(true);
		expect(known.map((key) => pattern.get(key)!.status)).toEqual(known.map(() => "shown"));
	});
});
