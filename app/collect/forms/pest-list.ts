import type { CropKey } from "#app/directory/crops.ts";
import type { Words } from "#app/lib/words.ts";

export type Pest = { key: string; name: Words; crops: CropKey[] };

/** Pests and diseases that growers of the network's crops look for each season. Common practice, no source. */
export const pests: Pest[] = [
	{ key: "scab", name: { en: "Apple scab", es: "Sarna del manzano" }, crops: ["apple"] },
	{ key: "fire_blight", name: { en: "Fire blight", es: "Tizón de fuego" }, crops: ["apple"] },
	{
		key: "codling_moth",
		name: { en: "Codling moth", es: "Palomilla de la manzana (carpocapsa)" },
		crops: ["apple"],
	},
	{
		key: "plum_curculio",
		name: { en: "Plum curculio", es: "Picudo del ciruelo" },
		crops: ["apple", "tart_cherry", "plum"],
	},
	{
		key: "cherry_leaf_spot",
		name: { en: "Cherry leaf spot", es: "Mancha de la hoja del cerezo" },
		crops: ["tart_cherry"],
	},
	{ key: "brown_rot", name: { en: "Brown rot", es: "Pudrición café (monilia)" }, crops: ["tart_cherry", "plum"] },
	{ key: "black_knot", name: { en: "Black knot", es: "Nudo negro" }, crops: ["tart_cherry", "plum"] },
	{
		key: "wing_drosophila",
		name: { en: "Spotted wing drosophila", es: "Mosca de alas manchadas" },
		crops: ["tart_cherry", "aronia"],
	},
	{
		key: "japanese_beetle",
		name: { en: "Japanese beetle", es: "Escarabajo japonés" },
		crops: ["apple", "tart_cherry", "plum", "aronia", "hazelnut"],
	},
	{
		key: "pawpaw_leaf_spot",
		name: { en: "Pawpaw leaf spot", es: "Mancha de la hoja del pawpaw" },
		crops: ["pawpaw"],
	},
	{
		key: "peduncle_borer",
		name: { en: "Pawpaw peduncle borer", es: "Barrenador de la flor del pawpaw" },
		crops: ["pawpaw"],
	},
	{
		key: "filbert_blight",
		name: { en: "Eastern filbert blight", es: "Tizón oriental del avellano" },
		crops: ["hazelnut"],
	},
	{ key: "nut_weevil", name: { en: "Hazelnut weevil", es: "Gorgojo de la avellana" }, crops: ["hazelnut"] },
	{ key: "big_bud_mite", name: { en: "Big bud mite", es: "Ácaro de las yemas" }, crops: ["hazelnut"] },
];
