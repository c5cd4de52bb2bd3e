import { expect, test } from "vitest";
import { defaultRules, protect, type ProtectProgress } from "./protect.ts";
import { protectInThread } from "./protect-thread.server.ts";
import { buildTable } from "./table.ts";

const rules = { ...defaultRules, minimumOwners: 3 };

/** States of counties by crops; in each state one county has a single grower of plums. */
function tableOf(states: number, counties: number) {
	const parent: Record<string, string> = {};
	const sums = new Map<string, { coordinates: string[]; owners: number; total: number; top1: number; top2: number }>();
	for (let state = 0; state < states; state++) {
		parent[`s${state}`] = "all areas";
		for (let county = 0; county < counties; county++) {
			const name = `s${state}c${county}`;
			parent[name] = `s${state}`;
			for (const [c, crop] of ["apple", "plum", "pawpaw", "aronia"].entries()) {
				const alone = county === state % counties && crop === "plum";
				const total = alone ? 70 : 100 + ((state * 31 + county * 17 + c * 13) % 90);
				for (const area of [name, `s${state}`, "all areas"]) {
					for (const what of [crop, "all"]) {
						const sum = sums.get(`${area}|${what}`) ?? {
							coordinates: [area, what],
							owners: 0,
							total: 0,
							top1: 0,
							top2: 0,
						};
						sum.owners += alone ? 1 : 9;
						sum.total += total;
						const part = alone ? total : total / 9;
						[sum.top1, sum.top2] = [sum.top1, sum.top2, part, alone ? 0 : part].toSorted((a, b) => b - a) as [
							number,
							number,
						];
						sums.set(`${area}|${what}`, sum);
					}
				}
			}
		}
	}
	const crops = Object.fromEntries(["apple", "plum", "pawpaw", "aronia"].map((crop) => [crop, "all"]));
	return buildTable({
		hierarchies: [
			{ name: "area", root: "all areas", parent },
			{ name: "crop", root: "all", parent: crops },
		],
		quantities: [{ key: "q" }],
		cells: [...sums.values()].map(({ coordinates, owners, ...share }) => ({
			coordinates,
			owners,
			quantities: { q: share },
		})),
	});
}

const small = tableOf(1, 4);
/** too large to be solved in one, with blocks that small */
const large = tableOf(4, 4);
const inBlocks = { blockCells: 50 };

test("threads choose what one thread chooses, and tell how far they are", async () => {
	for (const table of [small, large]) {
		const progress: ProtectProgress[] = [];
		const there = await protectInThread(table, rules, inBlocks, { onProgress: (step) => progress.push(step) });
		const here = await protect(table, rules, inBlocks);
		expect([...there.pattern]).toEqual([...here.pattern]);
		expect(there.audit).toEqual(here.audit);
		expect(there.audit.passed).toBe(true);
		expect(there.audit.shields).toBeGreaterThan(0);
		expect(there.loss).toEqual(here.loss);
		expect(progress.at(-1)!.phase).toBe("auditing");
		expect(progress.at(-1)).toMatchObject(table === large ? { done: 4, total: 4 } : { done: 1, total: 1 });
		expect(progress.every((step, i) => i === 0 || step.done >= progress[i - 1]!.done)).toBe(true);
	}
}, 120_000);

test("the caller's thread goes on meanwhile", async () => {
	let longest = 0;
	let last = performance.now();
	const ticking = setInterval(() => {
		longest = Math.max(longest, performance.now() - last);
		last = performance.now();
	}, 5);
	const started = performance.now();
	await protectInThread(large, rules, inBlocks);
	const whole = performance.now() - started;
	clearInterval(ticking);
	expect(longest).toBeLessThan(whole / 3);
}, 120_000);

test("a computation that is cancelled ends at once, with the canceller's reason", async () => {
	const cancel = new AbortController();
	const reason = new Error("not wanted any more");
	const result = protectInThread(large, rules, inBlocks, {
		signal: cancel.signal,
		onProgress: () => cancel.abort(reason),
	});
	await expect(result).rejects.toBe(reason);
	await expect(protectInThread(small, rules, {}, { signal: cancel.signal })).rejects.toBe(reason);
}, 120_000);

test("rules out of bounds are refused as they are without a thread", async () => {
	await expect(protectInThread(small, { ...rules, minimumOwners: 1 })).rejects.toThrow(RangeError);
}, 120_000);
