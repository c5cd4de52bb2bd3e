import { ALL_CROPS, REGION } from "./codes.ts";
import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { type OwnerPart, shareOf } from "./parts.ts";
import type { ProtectionRules } from "./rules.ts";
import { placed } from "./survey-table.ts";
import { buildTable, type ProtectionTable } from "./table.ts";

/**
 * The table of an earlier release, from the holdings kept of it: owners, totals and two largest owners of every cell. For
 * quantities that add up over areas and crops alike; how many operations answered is not among them.
 */
export function tableOfHoldings(input: {
	areas: AreaTree;
	cropKeys: readonly string[];
	quantities: readonly string[];
	rules: ProtectionRules;
	holdings: readonly Holding[];
}): ProtectionTable {
	const { areas, cropKeys, quantities, rules, holdings } = input;
	const around = cellsAround(areas);
	const cells = new Map<string, Map<string, OwnerPart>>();
	for (const { owner, areaKey, cropKey, amounts, waived = false } of holdings) {
		for (const key of around(areaKey, cropKey)) {
			const owners = cells.get(key) ?? new Map<string, OwnerPart>();
			cells.set(key, owners);
			const sofar = owners.get(owner)?.amounts;
			const sums = quantities.map((quantity, q) => (sofar?.[q] ?? 0) + (amounts[quantity] ?? 0));
			owners.set(owner, { owner, waived, amounts: sums });
		}
	}
	const table = buildTable({
		hierarchies: [
			{ name: "area", root: REGION, parent: Object.fromEntries(areas.map((a) => [a.areaKey, a.parentKey])) },
			{ name: "crop", root: ALL_CROPS, parent: Object.fromEntries(cropKeys.map((key) => [key, ALL_CROPS])) },
		],
		quantities: quantities.map((key) => ({ key })),
		cells: [...cells].map(([key, owners]) => ({
			coordinates: key.split("|"),
			owners: owners.size,
			soleOwner: owners.size === 1 ? [...owners.keys()][0] : null,
			quantities: Object.fromEntries(
				quantities.map((quantity, q) => [quantity, shareOf([...owners.values()], q, rules)] as const),
			),
		})),
	});
	return { ...table, holdings: placed(table, areas, holdings) };
}
