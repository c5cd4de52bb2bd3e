import { ALL_CROPS, REGION, RESPONDENTS } from "./codes.ts";
import type { OwnerShares } from "./owner-shares.ts";
import { type AreaTree, cellsAround, type Holding } from "./holdings.ts";
import { buildTable, type ProtectionTable, type Quantity, type TableHolding } from "./table.ts";

/**
 * The base quantities of a survey's table: who answered, and what its form declares. Measures are made of them, so what
 * hides these hides every measure.
 * @param baseKeys keys of the form's base measures, without their "base.".
 * @param sensitiveKeys shares of operations that are made of a sensitive question: how many have it is guarded too.
 */
export function surveyQuantities(baseKeys: readonly string[], sensitiveKeys: readonly string[] = []): Quantity[] {
	return [
		{ key: RESPONDENTS, counted: true, overlapsOver: ["crop"] },
		...baseKeys.map((key) => ({ key })),
		...sensitiveKeys.map((key) => ({ key, counted: true })),
	];
}

/**
 * A survey's table of area by crop. Cell keys are `area|crop`, as `cellKey(areaKey, cropKey)` makes them.
 * @param input.areas every county, district and state of the survey with the area right above; states have `region` above.
 * @param input.cropKeys the crops asked about, without `all`.
 * @param input.baseKeys and `sensitiveKeys` as for `surveyQuantities`; the shares must have them.
 * @param input.holdings who is behind the shares; without them only single owners of cells are known apart.
 * @throws {RangeError} when shares lie outside the areas or crops, or do not add up.
 */
export function surveyTable(input: {
	areas: AreaTree;
	cropKeys: readonly string[];
	shares: readonly OwnerShares[];
	baseKeys: readonly string[];
	sensitiveKeys?: readonly string[];
	holdings?: readonly Holding[];
}): ProtectionTable {
	const { areas, cropKeys, shares, baseKeys, sensitiveKeys = [], holdings } = input;
	const table = buildTable({
		hierarchies: [
			{ name: "area", root: REGION, parent: Object.fromEntries(areas.map((a) => [a.areaKey, a.parentKey])) },
			{ name: "crop", root: ALL_CROPS, parent: Object.fromEntries(cropKeys.map((key) => [key, ALL_CROPS])) },
		],
		quantities: surveyQuantities(baseKeys, sensitiveKeys),
		cells: shares.map(({ areaKey, cropKey, ...cell }) => ({ ...cell, coordinates: [areaKey, cropKey] })),
	});
	return holdings ? { ...table, holdings: placed(table, areas, holdings) } : table;
}

/** Holdings with the cells of a table that each is counted in. */
export function placed(table: ProtectionTable, areas: AreaTree, holdings: readonly Holding[]): TableHolding[] {
	const around = cellsAround(areas);
	const position = new Map(table.cells.map((cell, index) => [cell.key, index]));
	return holdings.map(({ owner, waived, amounts, areaKey, cropKey }) => {
		const cells = around(areaKey, cropKey).map((key) => {
			const index = position.get(key);
			if (index === undefined || table.cells[index]!.owners === 0) {
				throw new RangeError(`a holding lies in ${key}, where the shares know no owner`);
			}
			return index;
		});
		return { owner, waived, amounts, cells };
	});
}
