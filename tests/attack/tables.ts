import { REGION } from "#app/protect/codes.ts";
import type { Holding } from "#app/protect/holdings.ts";
import type { ProtectionRules } from "#app/protect/rules.ts";
import { surveyTable } from "#app/protect/survey-table.ts";
import { type Amount, amounts, counties, countCells, crops, districtOf, type Farm } from "./farms.ts";

export { crops } from "./farms.ts";

export const areaList = [
	...["d1", "d2"].map((areaKey) => ({ areaKey, parentKey: REGION })),
	...counties.map((areaKey) => ({ areaKey, parentKey: districtOf(areaKey) })),
];

/** The table as the stage is given it. */
export function tableOf(farms: readonly Farm[], quantities: readonly Amount[], rules: ProtectionRules) {
	const shares = [...countCells(farms)].map(([key, owners]) => {
		const [areaKey, cropKey] = key.split("|") as [string, string];
		const here = farms.filter(
			({ county, trees }) =>
				[county, districtOf(county), REGION].includes(areaKey) &&
				(cropKey === "all" ? Object.keys(trees).length > 0 : cropKey in trees),
		);
		const respondents = [...owners.keys()].map((owner) => here.filter((farm) => farm.owner === owner).length);
		const list = (quantity: Amount) => [...owners.values()].map((part) => part[quantity]);
		return {
			areaKey,
			cropKey,
			owners: owners.size,
			fewestOwners: owners.size,
			soleOwner: owners.size === 1 ? String([...owners.keys()][0]) : null,
			quantities: Object.fromEntries([
				["respondents", shareOf(respondents, rules)] as const,
				...quantities.map((quantity) => [quantity, shareOf(list(quantity), rules)] as const),
			]),
		};
	});
	const holdings = holdingsOf(farms, quantities);
	const table = surveyTable({ areas: areaList, cropKeys: crops, shares, baseKeys: quantities, holdings });
	// Counts of answers make a program of their own, which most tables do without.
	return quantities.length > 1
		? table
		: { ...table, quantities: table.quantities.filter(({ key }) => key !== "respondents") };
}

function shareOf(parts: readonly number[], rules: ProtectionRules) {
	const [top1 = 0, top2 = 0] = parts.toSorted((a, b) => b - a);
	const most = parts.toSorted((a, b) => b - a).slice(0, rules.largest?.owners ?? 0);
	return { total: sum(parts), top1, top2, ...(rules.largest && { largest: sum(most) }) };
}

function sum(list: readonly number[]): number {
	return list.reduce((a, b) => a + b, 0);
}

export function holdingsOf(farms: readonly Farm[], quantities: readonly Amount[]): Holding[] {
	const holdings = new Map<string, Holding & { amounts: Record<string, number> }>();
	for (const { owner, county, trees, lost } of farms) {
		for (const [cropKey, number] of Object.entries(trees)) {
			const key = `${owner} ${county} ${cropKey}`;
			const holding = holdings.get(key) ?? {
				owner: String(owner),
				areaKey: county,
				cropKey,
				amounts: { respondents: 0 },
			};
			holdings.set(key, holding);
			holding.amounts.respondents! += 1;
			for (const quantity of quantities) {
				holding.amounts[quantity] = (holding.amounts[quantity] ?? 0) + amounts[quantity](number, lost);
			}
		}
	}
	return [...holdings.values()];
}
