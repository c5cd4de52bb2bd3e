import type { OwnerShares } from "./owner-shares.ts";
import { buildTable, type ProtectionTable, type Quantity } from "./table.ts";

/** Code of the whole network in the area tree, and of all crops in the crop tree. */
export const REGION = "network";
export const ALL_CROPS = "all";

/** Operations that answered: a quantity of every survey. */
export const RESPONDENTS = "respondents";

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
 * @param areas every county, district and state of the survey with the area right above; states have `region` above.
 * @param cropKeys the crops asked about, without `all`.
 * @param baseKeys and `sensitiveKeys` as for `surveyQuantities`; the shares must have them.
 * @throws {RangeError} when shares lie outside the areas or crops, or do not add up.
 */
export function surveyTable(
	areas: readonly { areaKey: string; parentKey: string }[],
	cropKeys: readonly string[],
	shares: readonly OwnerShares[],
	baseKeys: readonly string[],
	sensitiveKeys: readonly string[] = [],
): ProtectionTable {
	return buildTable({
		hierarchies: [
			{ name: "area", root: REGION, parent: Object.fromEntries(areas.map((a) => [a.areaKey, a.parentKey])) },
			{ name: "crop", root: ALL_CROPS, parent: Object.fromEntries(cropKeys.map((key) => [key, ALL_CROPS])) },
		],
		quantities: surveyQuantities(baseKeys, sensitiveKeys),
		cells: shares.map(({ areaKey, cropKey, ...cell }) => ({ ...cell, coordinates: [areaKey, cropKey] })),
	});
}
