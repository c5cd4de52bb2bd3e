import { groupBy } from "#app/lib/group-by.ts";
import { ALL_CROPS } from "./codes.ts";
import type { Holding } from "./holdings.ts";
import { type OwnerPart, shareOf } from "./parts.ts";
import { ownReasons, type ProtectionRules } from "./rules.ts";

/** How much a grouping of a state's counties lets be shown, before shields. */
export interface GroupingCounts {
	districts: number;
	/** Cells of a district and a crop, and of all crops, that have answers and may be shown, or may not. */
	shown: number;
	withheld: number;
	/** Counties with answers of which at least one crop is told, in their district's figure; ascending. */
	told: string[];
	/** Counties with answers of which none is; ascending. */
	untold: string[];
}

export interface DistrictProposal {
	/** Counties of each proposed district, all of the state's, in ascending order. */
	districts: string[][];
	before: GroupingCounts;
	after: GroupingCounts;
}

export interface DistrictInput {
	/** The state's counties, and the group that each is in now: a district, or the county by itself. */
	counties: readonly { areaKey: string; group: string }[];
	/** Which counties share a border; those of other states are left aside. */
	neighborsOf: ReadonlyMap<string, readonly string[]>;
	/** Answers of the state's counties, as `listHoldings` gives them. */
	holdings: readonly Holding[];
	/** Keys of the base quantities. */
	quantities: readonly string[];
	rules: ProtectionRules;
	/** No district is made of more counties. */
	mostCounties?: number;
}

/** Until a cell may be shown, each owner brings it nearer; what is shown is worth more than what is near it. */
const NEAR = 0.5;

/**
 * Proposes districts of neighbouring counties so that most answers are told in some figure, and in as small a district as
 * may be. Counties begin alone; the two neighbouring districts whose joining gains most for their size are joined, until none
 * gains. Not proven best: finding that is a hard problem, and an associate changes the proposal by hand anyway. The same
 * input gives the same proposal.
 */
export function proposeDistricts(input: DistrictInput): DistrictProposal {
	const { counties, mostCounties = 12 } = input;
	const worth = valuer(input);
	let groups = counties.map(({ areaKey }) => [areaKey]).toSorted(byFirst);
	for (;;) {
		const best = bestJoin(groups, input, worth, mostCounties);
		if (!best) break;
		const joined = [...best[0], ...best[1]].toSorted();
		groups = [...groups.filter((group) => !best.includes(group)), joined].toSorted(byFirst);
	}
	return { districts: groups, before: countGrouping(input), after: countGroups(groups, worth) };
}

/** How much is shown when counties are grouped as `input.counties` says. */
export function countGrouping(input: DistrictInput): GroupingCounts {
	const groups = [...groupBy(input.counties, ({ group }) => group).values()];
	return countGroups(
		groups.map((list) => list.map(({ areaKey }) => areaKey)),
		valuer(input),
	);
}

/** What may be shown of a group of counties. */
type Worth = (group: readonly string[]) => Valued;
type Valued = { shown: number; withheld: number; told: string[]; untold: string[]; value: number };

function bestJoin(groups: readonly string[][], input: DistrictInput, worth: Worth, mostCounties: number) {
	const groupOf = new Map(groups.flatMap((group) => group.map((county) => [county, group] as const)));
	let best: { pair: [string[], string[]]; gain: number } | null = null;
	for (const group of groups) {
		const beside = new Set(group.flatMap((county) => input.neighborsOf.get(county) ?? []).map((c) => groupOf.get(c)));
		for (const other of beside) {
			if (!other || other[0]! <= group[0]! || group.length + other.length > mostCounties) continue;
			const gain = worth([...group, ...other]).value - worth(group).value - worth(other).value;
			const perCounty = gain / (group.length + other.length);
			if (gain > 1e-9 && perCounty > (best?.gain ?? 0) + 1e-12) best = { pair: [group, other], gain: perCounty };
		}
	}
	return best?.pair;
}

function valuer({ holdings, quantities, rules }: DistrictInput): Worth {
	const here = groupBy(holdings, ({ areaKey }) => areaKey);
	const known = new Map<string, Valued>();
	const value = (group: readonly string[]): Valued => {
		const answers = group.flatMap((county) => here.get(county) ?? []);
		const crops = groupBy(answers, ({ cropKey }) => cropKey);
		const cells = [...crops.values(), ...(answers.length > 0 ? [answers] : [])];
		const told = new Set<string>();
		let [shown, worthOfAll] = [0, 0];
		for (const cell of cells) {
			const places = new Set(cell.map(({ areaKey }) => areaKey));
			const { owners, fits } = judge(cell, quantities, rules);
			if (fits) for (const place of places) told.add(place);
			shown += fits ? 1 : 0;
			worthOfAll += places.size * (fits ? 1 : NEAR * Math.min(1, owners / rules.minimumOwners));
		}
		const places = [...new Set(answers.map(({ areaKey }) => areaKey))];
		const untold = places.filter((place) => !told.has(place));
		return { shown, withheld: cells.length - shown, told: [...told], untold, value: worthOfAll };
	};
	return (group) => {
		const key = group.toSorted().join(" ");
		const found = known.get(key) ?? value(group);
		known.set(key, found);
		return found;
	};
}

/** Whether answers may be shown as one cell. */
function judge(answers: readonly Holding[], quantities: readonly string[], rules: ProtectionRules) {
	const parts = [...groupBy(answers, ({ owner }) => owner)].map(([owner, list]): OwnerPart => {
		const amounts = quantities.map((key) => list.reduce((sum, holding) => sum + (holding.amounts[key] ?? 0), 0));
		return { owner, waived: list[0]!.waived ?? false, amounts };
	});
	const shares = Object.fromEntries(quantities.map((key, q) => [key, shareOf(parts, q, rules)] as const));
	const cell = { key: ALL_CROPS, coordinates: [ALL_CROPS], owners: parts.length, quantities: shares };
	return { owners: parts.length, fits: ownReasons(cell, rules).length === 0 };
}

function countGroups(groups: readonly (readonly string[])[], worth: Worth): GroupingCounts {
	const each = groups.map(worth);
	const sum = (of: (one: Valued) => number) => each.reduce((whole, one) => whole + of(one), 0);
	return {
		districts: groups.length,
		shown: sum(({ shown }) => shown),
		withheld: sum(({ withheld }) => withheld),
		told: each.flatMap(({ told }) => told).toSorted(),
		untold: each.flatMap(({ untold }) => untold).toSorted(),
	};
}

function byFirst(a: readonly string[], b: readonly string[]): number {
	return a[0]! < b[0]! ? -1 : 1;
}
