import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { changesByCell, type Edition } from "./revision.ts";
import type { ProtectionRules } from "./rules.ts";

/**
 * Cells of a base quantity that another survey's release of the season tells: it shows the cell, and of the owners behind
 * both hardly any gave another amount there (fewer than k), as when two surveys ask the same growers for their bearing
 * trees. Such a value counts as known here, whether this release withholds the cell or not.
 * Covered are quantities of the same key and unit, over the same areas and crops, that both surveys' tables have. Not covered:
 * quantities that can only be compared (a normal crop beside a harvest), and cells in which more owners differ.
 * @param others with holdings as they were when their release was drafted.
 * @returns by quantity key, keys of cells; for `protect`'s `shownElsewhere`.
 */
export function sharedCells(input: {
	areas: AreaTree;
	quantities: readonly string[];
	rules: ProtectionRules;
	holdings: readonly Holding[];
	others: readonly Edition[];
}): Map<string, Set<string>> {
	const areas = new Set(input.areas.map(({ areaKey }) => areaKey));
	const around = cellsAround(input.areas);
	const living = new Set(input.holdings.flatMap(({ areaKey, cropKey }) => around(areaKey, cropKey)));
	const told = input.quantities.map((quantity): [string, Set<string>] => {
		const here = amountsOf(input.holdings, quantity);
		const cells = input.others.flatMap(({ shown, holdings }) => {
			const there = amountsOf(holdings, quantity).filter(({ areaKey }) => areas.has(areaKey));
			if (there.length === 0) return [];
			const changed = changesByCell(there, here, [quantity], around);
			const same = (key: string) => (changed.get(key)?.size ?? 0) < input.rules.minimumOwners;
			return [...living].filter((key) => shown.has(key) && same(key));
		});
		return [quantity, new Set(cells)];
	});
	return new Map(told.filter(([, cells]) => cells.size > 0));
}

/** One quantity alone: what else two surveys ask differs anyway. */
function amountsOf(holdings: readonly Holding[], quantity: string): Holding[] {
	return holdings.flatMap(({ owner, areaKey, cropKey, amounts }) => {
		const amount = amounts[quantity];
		return amount === undefined ? [] : [{ owner, areaKey, cropKey, amounts: { [quantity]: amount } }];
	});
}
