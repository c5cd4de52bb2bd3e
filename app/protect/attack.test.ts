// An attacker who shares no code with the stage: knows only what is published, thinks in the smallest cells, writes
// each program as text, and asks how far each withheld cell can be narrowed down.
import * as fc from "fast-check";
import loadHighs from "highs";
import { expect, test } from "vitest";
import { protect, type Protection, type ProtectionRules } from "./protect.ts";
import { REGION } from "./codes.ts";
import { surveyTable } from "./survey-table.ts";

const areas = { d1: ["c1", "c2"], d2: ["c3", "c4", "c5"] };
const counties = Object.values(areas).flat();
const crops = ["apple", "plum", "pawpaw"];
const districtOf = (county: string) => (areas.d1.includes(county) ? "d1" : "d2");
const areaList = [
	{ areaKey: "d1", parentKey: REGION },
	{ areaKey: "d2", parentKey: REGION },
	...counties.map((county) => ({ areaKey: county, parentKey: districtOf(county) })),
];
const base = ["respondents", "bearing_trees", "normal_crop_lb", "harvested_lb"] as const;
type Base = (typeof base)[number];

interface Operation {
	owner: number;
	county: string;
	plantings: { crop: string; trees: number; lost: number }[];
}

const operations = fc.array(
	fc.record<Operation>({
		owner: fc.integer({ min: 0, max: 25 }),
		county: fc.constantFrom(...counties),
		plantings: fc.uniqueArray(
			fc.record({
				crop: fc.constantFrom(...crops),
				trees: fc.integer({ min: 1, max: 900 }),
				lost: fc.constantFrom(0, 0.2, 0.5, 1),
			}),
			{ selector: ({ crop }) => crop, minLength: 1 },
		),
	}),
	{ minLength: 1, maxLength: 60 },
);

/** key `area|crop` -> owner -> quantities, at every level, counted here from the answers themselves. */
function count(list: readonly Operation[]) {
	const cells = new Map<string, Map<number, Record<Base, number>>>();
	for (const { owner, county, plantings } of list) {
		for (const area of [county, districtOf(county), REGION]) {
			for (const crop of [...plantings.map((p) => p.crop), "all"]) {
				const chosen = plantings.filter((p) => crop === "all" || p.crop === crop);
				const owners = cells.get(`${area}|${crop}`) ?? new Map<number, Record<Base, number>>();
				const sum = owners.get(owner) ?? { respondents: 0, bearing_trees: 0, normal_crop_lb: 0, harvested_lb: 0 };
				sum.respondents += 1;
				for (const { trees, lost } of chosen) {
					sum.bearing_trees += trees;
					sum.normal_crop_lb += trees * 40;
					sum.harvested_lb += trees * 40 * (1 - lost);
				}
				owners.set(owner, sum);
				cells.set(`${area}|${crop}`, owners);
			}
		}
	}
	return cells;
}

const largest = (owners: Map<number, Record<Base, number>> | undefined, quantity: Base) =>
	[...(owners?.values() ?? [])].map((sum) => sum[quantity]).toSorted((a, b) => b - a);
const add = (list: readonly number[]) => list.reduce((a, b) => a + b, 0);

function tableOf(cells: ReturnType<typeof count>) {
	const shares = [...cells].map(([key, owners]) => {
		const [areaKey, cropKey] = key.split("|") as [string, string];
		const quantities = Object.fromEntries(
			base.map((quantity) => {
				const list = largest(owners, quantity);
				return [quantity, { total: add(list), top1: list[0] ?? 0, top2: list[1] ?? 0 }] as const;
			}),
		);
		const soleOwner = owners.size === 1 ? String([...owners.keys()][0]) : null;
		return { areaKey, cropKey, owners: owners.size, fewestOwners: owners.size, soleOwner, quantities };
	});
	return surveyTable({ areas: areaList, cropKeys: crops, shares, baseKeys: base.slice(1) });
}

/** Everything an attacker can write down about the smallest cells from the published ones, as rows of a program. */
function knowledge(published: ReadonlyMap<string, number>, quantity: Base) {
	const additive = quantity !== "respondents";
	const leaves = (key: string) => {
		const [area, crop] = key.split("|") as [string, string];
		const where = area === REGION ? counties : (areas[area as "d1" | "d2"] ?? [area]);
		const what = crop === "all" && additive ? crops : [crop];
		return where.flatMap((county) => what.map((c) => `x_${county}_${c}`));
	};
	const rows = [...published].map(([key, value]) => `${leaves(key).join(" + ")} = ${value}`);
	if (!additive) {
		for (const county of counties) {
			rows.push(`${crops.map((c) => `x_${county}_${c}`).join(" + ")} - x_${county}_all >= 0`);
			rows.push(...crops.map((c) => `x_${county}_all - x_${county}_${c} >= 0`));
		}
	}
	return { rows, leaves };
}

const highs = await loadHighs();

/** Finds how far one cell's value can be pushed, for someone who knows what is published and some cells more. */
function pusher(cells: ReturnType<typeof count>, pattern: Protection["pattern"], quantity: Base) {
	const known = (keys: Iterable<string>) =>
		[...keys].map((key) => [key, add(largest(cells.get(key), quantity))] as const);
	const open = [...pattern].filter(([, { status }]) => status !== "withheld").map(([key]) => key);
	return (target: string, sense: "Maximize" | "Minimize", more: Iterable<string> = []) => {
		const { rows, leaves } = knowledge(new Map(known([...open, ...more])), quantity);
		const text = `${sense}\n obj: ${leaves(target).join(" + ")}\nSubject To\n ${rows.join("\n ")}\nEnd`;
		const result = highs.solve(text, { output_flag: false });
		if (result.Status === "Unbounded" || result.Status === "Primal infeasible or unbounded") return Infinity;
		expect(result.Status).toBe("Optimal");
		return result.ObjectiveValue;
	};
}

/** What each owner knows who is alone in some cell, save one who is alone in the target itself. */
function soleKnowledge(cells: ReturnType<typeof count>, target: string) {
	const sole = new Map<number, string[]>();
	for (const [key, owners] of cells) {
		const only = [...owners.keys()][0]!;
		if (owners.size === 1) sole.set(only, [...(sole.get(only) ?? []), key]);
	}
	return [...sole.values()].filter((keys) => !keys.includes(target));
}

async function attack(list: readonly Operation[], rules: ProtectionRules) {
	const cells = count(list);
	const { pattern, audit } = await protect(tableOf(cells), rules);
	expect(audit).toMatchObject({ passed: true, failures: [] });
	const part = rules.dominancePercent / 100;
	for (const quantity of base) {
		const push = pusher(cells, pattern, quantity);
		for (const [key, { reasons }] of pattern) {
			const sums = largest(cells.get(key), quantity);
			if (reasons.length === 0 || reasons[0] === "shield" || !sums[0]) continue;
			const value = add(sums);
			const short = part * sums[0] - (value - sums[0] - (sums[1] ?? 0));
			const asked = Math.max(short, reasons.includes("too_few_owners") ? part * sums[0] : 0);
			const level = Math.min(value, quantity === "respondents" ? 1 : asked);
			const near = 1e-5 * (1 + value);
			const told = `${key} ${quantity}`;
			expect(push(key, "Maximize"), `${told} from above`).toBeGreaterThanOrEqual(value + level - near);
			expect(push(key, "Minimize"), `${told} from below`).toBeLessThanOrEqual(value - level + near);
			if (quantity !== "harvested_lb") continue;
			for (const known of soleKnowledge(cells, key)) {
				expect(push(key, "Maximize", known), `${told} by an owner`).toBeGreaterThanOrEqual(value + level - near);
			}
		}
	}
}

test("nobody narrows a withheld cell down below its level, nor any owner who alone makes up other cells", async () => {
	await fc.assert(
		fc.asyncProperty(operations, fc.constantFrom(3, 5), (list, minimumOwners) =>
			attack(list, { minimumOwners, dominancePercent: 10 }),
		),
		{ numRuns: 12, seed: 20260412, endOnFailure: true },
	);
}, 120_000);

test("the same answers in the same order give the same pattern", async () => {
	await fc.assert(
		fc.asyncProperty(operations, async (list) => {
			const rules = { minimumOwners: 5, dominancePercent: 10 };
			const first = await protect(tableOf(count(list)), rules);
			const second = await protect(tableOf(count(list)), rules);
			expect([...second.pattern]).toEqual([...first.pattern]);
		}),
		{ numRuns: 5, seed: 20260413 },
	);
}, 60_000);
