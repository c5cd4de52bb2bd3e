/** The network's crops in the order in which pages list them. */
export const cropKeys = ["apple", "tart_cherry", "plum", "aronia", "pawpaw", "hazelnut"] as const;
export type CropKey = (typeof cropKeys)[number];

/** Key of the cells and facts over all crops together. Not a crop: no planting has it. */
export const allCrops = "all";

export type Crop = { cropKey: CropKey; position: number; plantKind: "tree" | "bush"; bushelLb: number | null };

/**
 * Pounds in a bushel as the trade counts them; null where the crop is sold by weight only. Apple 42 (an extension processing
 * table gives 42 to 48), plum 56 (the same table 50 to 56; USDA Agriculture Handbook 697, from memory), cherry with stems
 * 56 (the same handbook, from memory). Aronia, pawpaw, hazelnut: common practice, no source.
 */
export const crops: readonly Crop[] = [
	{ cropKey: "apple", position: 1, plantKind: "tree", bushelLb: 42 },
	{ cropKey: "tart_cherry", position: 2, plantKind: "tree", bushelLb: 56 },
	{ cropKey: "plum", position: 3, plantKind: "tree", bushelLb: 56 },
	{ cropKey: "aronia", position: 4, plantKind: "bush", bushelLb: null },
	{ cropKey: "pawpaw", position: 5, plantKind: "tree", bushelLb: null },
	{ cropKey: "hazelnut", position: 6, plantKind: "bush", bushelLb: null },
];

export function isCropKey(text: string): text is CropKey {
	return (cropKeys as readonly string[]).includes(text);
}

/** Puts crop keys, "all" last, into the order in which pages list them. */
export function compareCrops(a: string, b: string): number {
	return positionOf(a) - positionOf(b);
}

function positionOf(key: string): number {
	const index = (cropKeys as readonly string[]).indexOf(key);
	return index < 0 ? cropKeys.length : index;
}
