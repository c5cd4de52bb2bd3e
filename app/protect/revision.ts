import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { type ProtectionRules, shortfall } from "./rules.ts";
import type { OwnerShare } from "./table.ts";

/** A release of the same survey that anybody may have kept: what it showed, and the answers that it was made of. */
export interface Edition {
	/** For the desk, such as the release's number. */
	name: string;
	/** Keys of the cells that it showed with figures. */
	shown: ReadonlySet<string>;
	/** As they were when it was made, one row for each owner, county and crop. */
	holdings: readonly Holding[];
}

/**
 * What lies between an earlier release and the draft in one cell. `none`: nobody's answers differ; `enough`: the rules
 * would let the difference be shown as a cell of its own; `few`: they would not.
 */
export type Difference = "none" | "enough" | "few";

export interface CellChange {
	cellKey: string;
	/** The earlier release in question. */
	edition: string;
	wasShown: boolean;
	/** Owners whose answers in the cell differ: entered, withdrawn, corrected, set aside. */
	changedOwners: number;
	difference: Difference;
	/**
	 * `keep_back`: the draft may not show the cell; `told`: the earlier release shows the very same, so that showing it
	 * again tells nothing and withholding it hides nothing; `free`: as if there were no earlier release.
	 */
	verdict: "keep_back" | "told" | "free";
}

export interface RevisionGuard {
	/** One for each earlier release and each cell with answers in it or in the draft, in a fixed order. */
	changes: CellChange[];
	/** Cell keys that the draft must withhold, each with the room that the change itself asks for, by quantity. */
	keptBack: ReadonlyMap<string, Readonly<Record<string, number>>>;
	/** Cell keys whose figures are known from an earlier release; a cell of these is no shield. */
	told: ReadonlySet<string>;
}

/**
 * For each cell of a revision, whether showing it beside the releases before would tell of too few owners.
 * Who subtracts one release from the next sees a table of differences. A cell of it rests on the owners whose answers
 * differ, and is judged by the same rules as any other cell: at least k owners, none dominating the change.
 * - Shown before, nobody differs: `told`.
 * - Shown before, few differ: `keep_back`; the earlier figure stays known and the new one is withheld.
 * - Withheld before, nobody or few differ: `keep_back`; the new figure would be the old one, or nearly.
 * - Enough differ, or the cell was not there before: `free`; its own reasons decide.
 * A cell that any earlier release keeps back is kept back, unless another told it. All of this is needed and not yet enough: shields come from
 * `protect`, to which `keptBack` and `told` are handed, and lines of both releases together are for `auditRevision`.
 * When one late answer keeps back the totals that matter, the revision is better left to wait for more.
 *
 * What it needs of each edition: the keys of the cells shown (`release.cell` where status is 'shown') and the holdings as
 * they were when its draft was computed: `listHoldings` at that time, kept beside the draft. Owner keys must be stable from
 * edition to edition and need not be ids; an owner who was forgotten keeps the row under any key that is nobody's. A
 * correction of answers that no amount tells (a day, a rating) shows in the holding's digest.
 * Not covered: weights. A new answer changes the weights of its stratum and so, a little, figures of cells in which
 * nobody's answers differ; this tells how many answered in the stratum and nothing of what.
 * @param holdings of the draft.
 * @param quantities keys of the base quantities, as in the survey's table.
 */
export function guardRevision(input: {
	areas: AreaTree;
	quantities: readonly string[];
	rules: ProtectionRules;
	earlier: readonly Edition[];
	holdings: readonly Holding[];
}): RevisionGuard {
	const { quantities, rules, earlier, holdings } = input;
	const around = cellsAround(input.areas);
	const living = [...new Set(holdings.flatMap(({ areaKey, cropKey }) => around(areaKey, cropKey)))].toSorted();
	const changes: CellChange[] = [];
	const told = new Set<string>();
	const keptBack = new Map<string, Record<string, number>>();
	for (const edition of earlier) {
		const changed = changesByCell(edition.holdings, holdings, quantities, around);
		for (const cellKey of living) {
			const owners = [...(changed.get(cellKey)?.values() ?? [])];
			const change = judge(cellKey, edition, owners, quantities, rules);
			changes.push(change);
			if (change.verdict === "told") told.add(cellKey);
			if (change.verdict === "keep_back") keptBack.set(cellKey, room(keptBack.get(cellKey), owners, quantities, rules));
		}
	}
	// What one release tells is known, whatever another withheld.
	for (const cellKey of told) keptBack.delete(cellKey);
	return { changes, keptBack, told };
}

/** By how much each quantity of one owner differs in a cell. */
export type Change = readonly number[];

function judge(
	cellKey: string,
	{ name, shown }: Edition,
	owners: readonly Change[],
	quantities: readonly string[],
	rules: ProtectionRules,
): CellChange {
	const wasShown = shown.has(cellKey);
	const difference = differenceOf(owners, quantities, rules);
	const keep = difference === "few" || (difference === "none" && !wasShown);
	const verdict = keep ? "keep_back" : difference === "none" ? "told" : "free";
	return { cellKey, edition: name, wasShown, changedOwners: owners.length, difference, verdict };
}

export function differenceOf(
	owners: readonly Change[],
	quantities: readonly string[],
	rules: ProtectionRules,
): Difference {
	if (owners.length === 0) return "none";
	if (owners.length < rules.minimumOwners) return "few";
	const dominated = quantities.some(
		(_, q) =>
			shortfall(
				shareOf(
					owners.map((change) => change[q]!),
					rules,
				),
				rules,
			) > 0,
	);
	return dominated ? "few" : "enough";
}

/** Changes as a cell of their own. Up or down, each is as large as it is; leave to publish answers is none for changes. */
function shareOf(changes: readonly number[], rules: ProtectionRules): OwnerShare {
	const sizes = changes.map(Math.abs).toSorted((a, b) => b - a);
	return {
		total: sum(sizes),
		top1: sizes[0] ?? 0,
		top2: sizes[1] ?? 0,
		largest: sum(sizes.slice(0, rules.largest?.owners ?? 0)),
	};
}

function sum(list: readonly number[]): number {
	return list.reduce((a, b) => a + b, 0);
}

/** p% of the largest change in each quantity: nearer than that nobody may come to it. */
function room(
	asked: Readonly<Record<string, number>> = {},
	owners: readonly Change[],
	quantities: readonly string[],
	{ dominancePercent }: ProtectionRules,
): Record<string, number> {
	const largest = (q: number) => owners.reduce((most, change) => Math.max(most, Math.abs(change[q]!)), 0);
	return Object.fromEntries(
		quantities.map((key, q) => [key, Math.max(asked[key] ?? 0, (dominancePercent / 100) * largest(q))] as const),
	);
}

/** cell -> owner -> by how much that owner's amounts in the cell differ; owners with no other answers are not in it. */
export function changesByCell(
	before: readonly Holding[],
	after: readonly Holding[],
	quantities: readonly string[],
	around: (areaKey: string, cropKey: string) => string[],
): Map<string, Map<string, Change>> {
	const was = byPlace(before);
	const is = byPlace(after);
	const cells = new Map<string, Map<string, Change>>();
	for (const place of new Set([...was.keys(), ...is.keys()])) {
		const [old, now] = [was.get(place), is.get(place)];
		const change = quantities.map((key) => (now?.amounts[key] ?? 0) - (old?.amounts[key] ?? 0));
		if (old && now && old.digest === now.digest && change.every((part) => part === 0)) continue;
		const { owner, areaKey, cropKey } = (now ?? old)!;
		for (const key of around(areaKey, cropKey)) {
			const owners = cells.get(key) ?? new Map<string, Change>();
			cells.set(key, owners);
			const sofar = owners.get(owner);
			owners.set(owner, sofar ? sofar.map((part, q) => part + change[q]!) : change);
		}
	}
	return cells;
}

function byPlace(holdings: readonly Holding[]): Map<string, Holding> {
	return new Map(holdings.map((holding) => [[holding.owner, holding.areaKey, holding.cropKey].join(" "), holding]));
}
