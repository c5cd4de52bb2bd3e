/** A number from 0 to below 1. */
export type Random = () => number;

/** The same numbers for the same seed on every machine. */
export function randomFrom(seed: number): Random {
	let state = seed >>> 0;
	return () => {
		state = (state + 0x6d2b79f5) >>> 0;
		let mixed = Math.imul(state ^ (state >>> 15), state | 1);
		mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
	};
}

export const counties = ["c1", "c2", "c3", "c4", "c5"];
export const districtOf = (county: string) => (county < "c3" ? "d1" : "d2");
export const crops = ["apple", "plum"];

/** One operation's answers: trees by crop, and the share of a normal crop that was lost. */
export interface Farm {
	operation: number;
	owner: number;
	county: string;
	trees: Record<string, number>;
	lost: number;
}

export const amounts = {
	trees: (trees: number) => trees,
	lb: (trees: number, lost: number) => trees * 40 * (1 - lost),
};
export type Amount = keyof typeof amounts;

/** Many small and some large, some owners with several, some who lost everything. */
export function madeFarms(random: Random, count: number, from = 0): Farm[] {
	const owners = Math.ceil(count * 0.8);
	return Array.from({ length: count }, (_, at) => ({
		operation: from + at,
		owner: from + Math.floor(random() * owners),
		county: one(random, counties),
		trees: Object.fromEntries(crops.filter(() => random() < 0.7).map((crop) => [crop, size(random)])),
		lost: one(random, [0, 0, 0.2, 0.5, 1]),
	}));
}

/** What late answers, withdrawals and corrections leave: sometimes of one, sometimes of many. */
export function mended(random: Random, farms: readonly Farm[]): Farm[] {
	const share = one(random, [0.03, 0.1, 0.5]);
	const kept = farms.filter(() => random() >= share / 3);
	const corrected = kept.map((farm) => (random() < share / 3 ? { ...farm, lost: one(random, [0, 0.1, 0.3]) } : farm));
	const next = Math.max(...farms.map(({ operation }) => operation)) + 1;
	const late = madeFarms(random, Math.round(farms.length * share), next);
	return [...corrected, ...late];
}

export function shuffled<T>(random: Random, list: readonly T[]): T[] {
	return list
		.map((item) => ({ item, at: random() }))
		.toSorted((a, b) => a.at - b.at)
		.map(({ item }) => item);
}

function one<T>(random: Random, list: readonly T[]): T {
	return list[Math.floor(random() * list.length)]!;
}

function size(random: Random): number {
	return Math.ceil(random() < 0.15 ? 200 + random() * 2000 : 1 + random() * 120);
}

/** `area|crop` -> owner -> amounts, at every level, counted from the answers themselves. */
export type Cells = Map<string, Map<number, Record<Amount, number>>>;

export function countCells(farms: readonly Farm[]): Cells {
	const cells: Cells = new Map();
	for (const { owner, county, trees, lost } of farms) {
		for (const area of [county, districtOf(county), "network"]) {
			for (const crop of crops.filter((key) => key in trees)) {
				for (const key of [`${area}|${crop}`, `${area}|all`]) {
					const owners = cells.get(key) ?? new Map<number, Record<Amount, number>>();
					cells.set(key, owners);
					const sofar = owners.get(owner) ?? { trees: 0, lb: 0 };
					owners.set(owner, {
						trees: sofar.trees + amounts.trees(trees[crop]!),
						lb: sofar.lb + amounts.lb(trees[crop]!, lost),
					});
				}
			}
		}
	}
	return cells;
}
