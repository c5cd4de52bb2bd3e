import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { ownCells } from "./levels.ts";
import { type Change, changesByCell, differenceOf, type Edition } from "./revision.ts";
import { LEAST_OWNERS, type ProtectionRules } from "./rules.ts";
import { cellKey } from "./table.ts";

/**
 * A release of another survey of the season, which asked the same quantities of growers who were asked here too.
 * What an attacker may make of both together is decided here:
 * - Quantities are the same where key and unit are. Counts of answers are never the same: each survey has its own.
 * - Cells are compared by key. An area's key stands for the same counties in every survey but the network's, whose cells
 *   are whatever each survey covers; who was asked or answered in one survey alone differs by the whole amount.
 * - Nobody differs: whoever has both releases knows that it is one value, and it is told where either tells it.
 * - Fewer than k owners differ: who they are and what they answered otherwise counts as known, since they know it and may
 *   tell each other. So a value told there is `reckoned` here, and a value withheld there must not be told here.
 * - k owners or more differ: nothing ties one value to the other. What so many owners changed may be told of any cell.
 * - Where both tell a cell, their difference is a figure too. It may not rest on one owner or two, nor be dominated. The full
 *   k is not asked of it: who answered which survey is told nowhere, while a revision names what it changes.
 */
export interface OtherSurvey extends Edition {
	areas: AreaTree;
	cropKeys: readonly string[];
	/** Every quantity that its holdings have and that adds up over areas and crops. */
	quantities: readonly string[];
	/** Those of them that the draft's survey asks too, in the same unit. */
	shared: readonly string[];
	/** Those that it was protected by. */
	rules: ProtectionRules;
}

/** By quantity, keys of cells. */
export type CellsByQuantity = ReadonlyMap<string, ReadonlySet<string>>;

export interface SurveyGuard {
	/** Cells that the draft must withhold, each with the room that this asks for, by quantity. */
	keptBack: ReadonlyMap<string, Readonly<Record<string, number>>>;
	/** Cells whose very value another release tells: nothing is left to keep of them, and they shield nothing. */
	told: CellsByQuantity;
	/** Cells whose value can be reckoned by who knows what fewer than k owners answered otherwise: they shield nothing. */
	reckoned: CellsByQuantity;
}

/** How the same quantity of the same cell differs between two surveys. */
export interface SurveyDifference {
	owners: readonly string[];
	changes: readonly Change[];
	/** Whether anybody may be taken to know it: nobody differs, or fewer than k do. */
	known: boolean;
	/** Whether it would tell of one or two owners, so that it must not be found out. */
	tells: boolean;
}

/** Sums of doubles differ in their last digits. */
const SAME = 1e-6;
const NOBODY: SurveyDifference = { owners: [], changes: [], known: true, tells: false };

/** One survey's side of a comparison. */
export type Side = Pick<OtherSurvey, "areas" | "holdings">;

/** For any cell that both surveys have, how one quantity differs in it. */
export function differencesBetween(
	there: Side,
	here: Side,
	quantity: string,
	rules: ProtectionRules,
): (cellKey: string) => SurveyDifference {
	const inside = new Set(here.areas.map(({ areaKey }) => areaKey));
	const [aroundHere, aroundThere] = [cellsAround(here.areas), cellsAround(there.areas)];
	// A county that is not asked here is a part of the network's cells there all the same.
	const around = (areaKey: string, cropKey: string) =>
		(inside.has(areaKey) ? aroundHere : aroundThere)(areaKey, cropKey);
	const changed = changesByCell(amountsOf(there, quantity), amountsOf(here, quantity), [quantity], around);
	return (key) => {
		// Who answered the same in sum, or nothing, differs in nothing.
		const owners = new Map([...(changed.get(key) ?? [])].filter(([, [by]]) => Math.abs(by!) > SAME));
		if (owners.size === 0) return NOBODY;
		const changes = [...owners.values()];
		const least = { ...rules, minimumOwners: LEAST_OWNERS, largest: null };
		return {
			owners: [...owners.keys()],
			changes,
			known: owners.size < rules.minimumOwners,
			tells: differenceOf(changes, [quantity], least) === "few",
		};
	};
}

/** One quantity alone: what else two surveys ask differs anyway. */
function amountsOf({ holdings }: Side, quantity: string): Holding[] {
	return holdings.flatMap(({ owner, areaKey, cropKey, amounts }) => {
		const amount = amounts[quantity];
		return amount === undefined ? [] : [{ owner, areaKey, cropKey, amounts: { [quantity]: amount } }];
	});
}

/**
 * What the draft must keep back, and what is known of it, for the releases of other surveys of the season. All of this is
 * needed and not yet enough: lines of all releases together are for `auditSurveys`.
 */
export function guardSurveys(input: {
	areas: AreaTree;
	rules: ProtectionRules;
	holdings: readonly Holding[];
	others: readonly OtherSurvey[];
}): SurveyGuard {
	const { areas, rules, holdings, others } = input;
	const living = livingCells({ areas, holdings });
	const told = new Map<string, Set<string>>();
	const reckoned = new Map<string, Set<string>>();
	const hidden: Room[] = [];
	const differing: Room[] = [];
	for (const other of others) {
		const levels = levelsOf(other);
		const there = livingCells(other);
		for (const quantity of other.shared) {
			const between = differencesBetween(other, { areas, holdings }, quantity, rules);
			for (const key of living) {
				if (!there.has(key)) continue;
				const { changes, known, tells } = between(key);
				if (other.shown.has(key)) {
					if (changes.length === 0) noted(told, quantity, key);
					else if (known) noted(reckoned, quantity, key);
					if (tells) differing.push({ key, quantity, room: (rules.dominancePercent / 100) * largest(changes) });
				} else if (known) hidden.push({ key, quantity, room: levels.get(key)?.[quantity] ?? 0 });
			}
		}
	}
	// What one release tells is known, whatever another withheld.
	const kept = hidden.filter(({ key, quantity }) => !told.get(quantity)?.has(key));
	return { keptBack: together([...kept, ...differing]), told, reckoned };
}

interface Room {
	key: string;
	quantity: string;
	room: number;
}

function together(rooms: readonly Room[]): Map<string, Record<string, number>> {
	const cells = new Map<string, Record<string, number>>();
	for (const { key, quantity, room } of rooms) {
		const asked = cells.get(key) ?? {};
		cells.set(key, { ...asked, [quantity]: Math.max(asked[quantity] ?? 0, room) });
	}
	return cells;
}

function noted(cells: Map<string, Set<string>>, quantity: string, key: string) {
	const known = cells.get(quantity);
	if (known) known.add(key);
	else cells.set(quantity, new Set([key]));
}

/** Every cell in which somebody holds something. */
function livingCells({ areas, holdings }: Side): Set<string> {
	const around = cellsAround(areas);
	const places = new Map(holdings.map(({ areaKey, cropKey }) => [cellKey(areaKey, cropKey), { areaKey, cropKey }]));
	return new Set([...places.values()].flatMap(({ areaKey, cropKey }) => around(areaKey, cropKey)));
}

/** Cells in which somebody answered, and which the release did not show. */
export function withheldCells(other: OtherSurvey): Set<string> {
	return new Set([...livingCells(other)].filter((key) => !other.shown.has(key)));
}

/** What its own cells asked for, by cell and quantity. */
function levelsOf(other: OtherSurvey): Map<string, Readonly<Record<string, number>>> {
	const table = tableOfHoldings(other);
	return new Map(ownCells(table, other.rules).map(({ index, levels }) => [table.cells[index]!.key, levels]));
}

function largest(changes: readonly Change[]): number {
	return changes.reduce((most, [by]) => Math.max(most, Math.abs(by!)), 0);
}
