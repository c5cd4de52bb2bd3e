import type { PlantingAsked } from "../steps.ts";

type Crop = { cropKey: string; plantKind: "tree" | "bush"; bushelLb: number | null };

/** Invented plantings of crops, to try a form with: as many bearing trees as a middling orchard has. */
export function samplePlantings(crops: Crop[]): PlantingAsked[] {
	return crops.map(({ cropKey, plantKind, bushelLb }, index) => ({
		plantingId: `00000000-0000-4000-8000-${String(index + 1).padStart(12, "0")}`,
		cropKey,
		cultivar: "",
		bearingTrees: 120,
		plantKind,
		bushelLb,
	}));
}
