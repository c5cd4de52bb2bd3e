import { REGION } from "./codes.ts";
import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { changesByCell, type Edition } from "./revision.ts";
import type { ProtectionRules } from "./rules.ts";
import { cellKey } from "./table.ts";

/** A release of another survey of the season, and the quantities that both surveys ask: same key, same unit. */
export interface OtherSurvey extends Edition {
	quantities: readonly string[];
}

/** By quantity, keys of cells. */
export type CellsByQuantity = ReadonlyMap<string, ReadonlySet<string>>;

/** What releases of other surveys of the season mean for the cells of this one. */
export interface SharedCells {
	/** The very value is shown there: it is known here, whatever is withheld. */
	told: CellsByQuantity;
	/** The very value is withheld there, so that it may not be shown here; with the room that it keeps, by quantity. */
	keptBack: ReadonlyMap<string, Readonly<Record<string, number>>>;
	/** What the joint audit writes down its equations from; without it none is made. */
	releases?: SharedReleases;
}

export interface SharedReleases {
	areas: AreaTree;
	/** behind the draft */
	holdings: readonly Holding[];
	others: readonly OtherSurvey[];
}

/** Sums of doubles differ in their last digits. */
const SAME = 1e-6;

/**
 * Which cells two surveys of a season share, as when a watch of the bloom and a survey after harvest both ask the same
 * growers for their bearing trees. A cell's value is one and the same in both where each owner's amount in it is, and that
 * takes the same respondents: who answered one survey alone differs by all that is theirs. Then
 * - shown there: known here (`told`), by both ends of a bound. Nothing of it is left to protect, and it shields nothing;
 * - withheld there: kept back here with p% of its largest owner as room, or this release would tell what that one hides.
 * Where anybody differs nothing is carried over: who answered which survey is told nowhere, and the bands of respondents
 * bound no amount.
 *
 * Compared by area and crop: a county of states that are not asked here is a part of the network's cells there.
 * Not the same quantity, and so never carried over: counts of answers, of which each survey has its own; amounts that can
 * only be compared (a normal crop beside a harvest); the trees of the frame, which no release tells.
 * What follows from lines of both releases together, such as one of which this release shows one part and the other one the
 * rest, is for `BesideOthers`, which takes `releases` as one program.
 * Not covered: cells in which anybody's amount differs. Nothing ties their two values to each other there, though somebody
 * who knows how few differ, or an owner who knows the own difference, could say how far apart they are at most.
 * @param others with holdings as they were when their release was drafted.
 */
export function sharedCells(input: {
	areas: AreaTree;
	rules: ProtectionRules;
	holdings: readonly Holding[];
	others: readonly OtherSurvey[];
}): SharedCells {
	const { areas, holdings, others } = input;
	const around = aroundWithin(areas);
	const living = new Set(holdings.flatMap(({ areaKey, cropKey }) => around(areaKey, cropKey)));
	const told = new Map<string, Set<string>>();
	const hidden = new Map<string, Set<string>>();
	for (const other of others) {
		for (const quantity of other.quantities) {
			const same = sameCells(other.holdings, holdings, quantity, around);
			for (const key of same) if (living.has(key)) note(other.shown.has(key) ? told : hidden, quantity, key);
		}
	}
	return { told, keptBack: roomsOf(hidden, told, input, around), releases: { areas, holdings, others } };
}

/** Keys of the cells in which somebody answered and each owner has as much in both. */
export function sameCells(
	there: readonly Holding[],
	here: readonly Holding[],
	quantity: string,
	around: (areaKey: string, cropKey: string) => string[],
): Set<string> {
	const [was, is] = [amountsOf(there, quantity), amountsOf(here, quantity)];
	const changed = changesByCell(was, is, [quantity], around);
	const answered = new Set(was.flatMap(({ areaKey, cropKey }) => around(areaKey, cropKey)));
	const differs = (key: string) => [...(changed.get(key)?.values() ?? [])].some(([by]) => Math.abs(by!) > SAME);
	return new Set([...answered].filter((key) => !differs(key)));
}

/** As `cellsAround`; counties outside the survey's areas are in the network's cells alone. */
export function aroundWithin(areas: AreaTree): (areaKey: string, cropKey: string) => string[] {
	const inside = new Set(areas.map(({ areaKey }) => areaKey));
	const around = cellsAround([...areas]);
	const network = cellsAround([]);
	return (areaKey, cropKey) => (inside.has(areaKey) ? around(areaKey, cropKey) : network(REGION, cropKey));
}

/** What one release tells is known, whatever another withheld. */
function roomsOf(
	hidden: CellsByQuantity,
	told: CellsByQuantity,
	{ rules, holdings }: { rules: ProtectionRules; holdings: readonly Holding[] },
	around: (areaKey: string, cropKey: string) => string[],
): Map<string, Record<string, number>> {
	const rooms = new Map<string, Record<string, number>>();
	for (const [quantity, keys] of hidden) {
		const largest = largestOwners(amountsOf(holdings, quantity), quantity, around);
		for (const key of keys) {
			if (told.get(quantity)?.has(key)) continue;
			const room = (rules.dominancePercent / 100) * (largest.get(key) ?? 0);
			rooms.set(key, { ...rooms.get(key), [quantity]: room });
		}
	}
	return rooms;
}

function largestOwners(
	holdings: readonly Holding[],
	quantity: string,
	around: (areaKey: string, cropKey: string) => string[],
): Map<string, number> {
	const sums = new Map<string, number>();
	const largest = new Map<string, number>();
	for (const { owner, areaKey, cropKey, amounts } of holdings) {
		for (const key of around(areaKey, cropKey)) {
			const sum = (sums.get(cellKey(key, owner)) ?? 0) + amounts[quantity]!;
			sums.set(cellKey(key, owner), sum);
			largest.set(key, Math.max(largest.get(key) ?? 0, sum));
		}
	}
	return largest;
}

function note(cells: Map<string, Set<string>>, quantity: string, key: string) {
	cells.set(quantity, (cells.get(quantity) ?? new Set()).add(key));
}

/** One quantity alone: what else two surveys ask differs anyway. */
export function amountsOf(holdings: readonly Holding[], quantity: string): Holding[] {
	return holdings.flatMap(({ owner, areaKey, cropKey, amounts }) => {
		const amount = amounts[quantity];
		return amount === undefined ? [] : [{ owner, areaKey, cropKey, amounts: { [quantity]: amount } }];
	});
}
