import { ALL_CROPS, REGION } from "./codes.ts";
import { cellKey } from "./table.ts";

/** What one owner answered of one crop in one county, operations summed. */
export interface Holding {
	owner: string;
	areaKey: string;
	cropKey: string;
	/** By key of `surveyQuantities`. */
	amounts: Readonly<Record<string, number>>;
	/** Stands for every answer that figures are made of, also those that no amount tells: alike only where all are. */
	digest?: string;
	/** Whether the owner allows publication. */
	waived?: boolean;
}

/** The areas of a survey as `surveyTable` takes them. */
export type AreaTree = readonly { areaKey: string; parentKey: string }[];

/** The keys of every cell that a county's crop is counted in: that crop and all crops, in the county and all around it. */
export function cellsAround(areas: AreaTree): (areaKey: string, cropKey: string) => string[] {
	const parentOf = new Map(areas.map((area) => [area.areaKey, area.parentKey]));
	const known = new Map<string, string[]>();
	const chainOf = (areaKey: string): string[] => {
		const parent = areaKey === REGION ? undefined : parentOf.get(areaKey);
		if (parent === undefined && areaKey !== REGION) throw new RangeError(`${areaKey} is no area of the survey`);
		return parent === undefined ? [areaKey] : [areaKey, ...chainOf(parent)];
	};
	return (areaKey, cropKey) => {
		const chain = known.get(areaKey) ?? chainOf(areaKey);
		known.set(areaKey, chain);
		return chain.flatMap((area) => [cellKey(area, cropKey), cellKey(area, ALL_CROPS)]);
	};
}
