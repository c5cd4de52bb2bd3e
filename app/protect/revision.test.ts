import { expect, test } from "vitest";
import type { Holding } from "./holdings.ts";
import { type Edition, guardRevision } from "./revision.ts";
import { defaultRules } from "./rules.ts";
import { REGION } from "./codes.ts";

const areas = [{ areaKey: "s", parentKey: REGION }, ...["c1", "c2"].map((areaKey) => ({ areaKey, parentKey: "s" }))];
const holding = (owner: string, lb: number, areaKey = "c1", cropKey = "apple"): Holding => ({
	owner,
	areaKey,
	cropKey,
	amounts: { lb },
	digest: `${owner} ${lb}`,
});
/** `count` owners with 100 lb each, from a first number on. */
const orchard = (count: number, areaKey = "c1", from = 0) =>
	Array.from({ length: count }, (_, at) => holding(`o${from + at}`, 100, areaKey));
const everywhere = ["c1", "c2", "s", REGION].flatMap((area) => [`${area}|apple`, `${area}|all`]);
const edition = (holdings: Holding[], shown: string[] = everywhere): Edition => ({
	name: "1",
	shown: new Set(shown),
	holdings,
});
const guard = (earlier: Edition[], holdings: Holding[]) =>
	guardRevision({ areas, quantities: ["lb"], rules: defaultRules, earlier, holdings });
const verdicts = (earlier: Edition[], holdings: Holding[]) =>
	Object.fromEntries(guard(earlier, holdings).changes.map(({ cellKey, verdict }) => [cellKey, verdict]));

test("a figure shown before, with the very same answers, may be shown again and shields nothing", () => {
	const same = orchard(9);
	expect(guard([edition(same)], same)).toMatchObject({
		told: new Set(["c1|all", "c1|apple", "s|all", "s|apple", `${REGION}|all`, `${REGION}|apple`]),
	});
	expect(guard([edition(same)], same).keptBack.size).toBe(0);
});

test("one late answer keeps back every cell that it is counted in, and no other", () => {
	const before = [...orchard(9), ...orchard(9, "c2", 20)];
	const after = [...before, holding("late", 700)];
	const told = verdicts([edition(before)], after);
	expect(told).toMatchObject({ "c1|apple": "keep_back", "s|all": "keep_back", [`${REGION}|apple`]: "keep_back" });
	expect(told).toMatchObject({ "c2|apple": "told", "c2|all": "told" });
	expect(guard([edition(before)], after).keptBack.get("c1|apple")).toEqual({ lb: 70 });
});

test("four changes are too few and five are enough", () => {
	const before = orchard(12);
	const mended = (count: number) => before.map((one, at) => (at < count ? holding(one.owner, 120) : one));
	expect(verdicts([edition(before)], mended(4))["c1|apple"]).toBe("keep_back");
	expect(verdicts([edition(before)], mended(5))["c1|apple"]).toBe("free");
});

test("a change of five owners that one of them nearly makes alone is kept back", () => {
	const before = orchard(12);
	const after = before.map((one, at) => (at < 5 ? holding(one.owner, at === 0 ? 900 : 101) : one));
	expect(verdicts([edition(before)], after)["c1|apple"]).toBe("keep_back");
});

test("a withdrawal counts as a change, and two operations of one owner as one owner", () => {
	const before = [...orchard(12), holding("o0", 40, "c2")];
	const { changes } = guard(
		[edition(before)],
		before.filter(({ owner }) => owner !== "o0"),
	);
	const region = changes.find(({ cellKey }) => cellKey === `${REGION}|apple`);
	expect(region).toMatchObject({ changedOwners: 1, difference: "few", verdict: "keep_back" });
});

test("a cell withheld before stays withheld until enough of its answers are others", () => {
	const before = orchard(4);
	const withheld = edition(before, []);
	expect(verdicts([withheld], before)["c1|apple"]).toBe("keep_back");
	expect(verdicts([withheld], [...before, ...orchard(4, "c1", 10)])["c1|apple"]).toBe("keep_back");
	expect(verdicts([withheld], [...before, ...orchard(5, "c1", 10)])["c1|apple"]).toBe("free");
});

test("a county that nobody had answered for before is as in a first release", () => {
	const before = orchard(9);
	expect(verdicts([edition(before)], [...before, ...orchard(6, "c2", 20)])["c2|apple"]).toBe("free");
});

test("an answer that no amount tells is a change too", () => {
	const before = orchard(9);
	const after = before.map((one, at) => (at === 0 ? { ...one, digest: "another day" } : one));
	expect(verdicts([edition(before)], after)["c1|apple"]).toBe("keep_back");
});

test("every earlier release counts: a change that took two steps can be subtracted in one", () => {
	const first = orchard(12);
	const second = first.map((one, at) => (at < 5 ? holding(one.owner, 120) : one));
	// Back to the first answers but for one owner: enough differ from the second release, too few from the first.
	const third = first.map((one, at) => (at === 0 ? holding(one.owner, 130) : one));
	expect(verdicts([edition(second)], third)["c1|apple"]).toBe("free");
	expect(guard([edition(first), { ...edition(second), name: "2" }], third).keptBack.has("c1|apple")).toBe(true);
});

const people = (counts: number[][]) =>
	counts.flatMap((row, r) =>
		row.flatMap((count, c) =>
			Array.from({ length: count }, (_, at) => holding(`${r}${c}-${at}`, 1, `d${r}`, c === 0 ? "men" : "women")),
		),
	);

// Handbook on Statistical Disclosure Control (Hundepool et al.), section 5.2, geographical differencing: the same two tables
// of men and women in three districts before and after a border moved; three differences are above 0 and below 3.
test("the handbook's two tables that differ by a few people give three cells too small to show", () => {
	const old = [
		[52, 55],
		[130, 140],
		[39, 49],
	];
	const now = [
		[50, 54],
		[128, 140],
		[39, 49],
	];
	const districts = [0, 1, 2].map((r) => ({ areaKey: `d${r}`, parentKey: REGION }));
	const cells = [0, 1, 2].flatMap((r) => [`d${r}|men`, `d${r}|women`]);
	const { changes } = guardRevision({
		areas: districts,
		quantities: ["lb"],
		rules: { minimumOwners: 3, dominancePercent: 10 },
		earlier: [edition(people(old), cells)],
		holdings: people(now),
	});
	const ofCells = changes.filter(({ cellKey }) => cells.includes(cellKey));
	expect(
		ofCells
			.filter(({ difference }) => difference === "few")
			.map(({ cellKey, changedOwners }) => [cellKey, changedOwners]),
	).toEqual([
		["d0|men", 2],
		["d0|women", 1],
		["d1|men", 2],
	]);
});
