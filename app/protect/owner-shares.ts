import type { OwnerShare } from "./table.ts";

/** Who stands behind one crop in one area of a survey; only cells with at least one owner are listed. */
export interface OwnerShares {
	areaKey: string;
	cropKey: string;
	/** Distinct owners who answered anything about the crop here. */
	owners: number;
	/** Distinct owners behind the measure that the fewest answered here. */
	fewestOwners: number;
	soleOwner: string | null;
	/** Whether all here who answered a sensitive question gave the same answer. */
	uniform?: boolean;
	/** By key of `surveyQuantities`; respondents are operations. */
	quantities: Readonly<Record<string, OwnerShare>>;
}
