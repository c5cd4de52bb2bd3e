import { randomUUID } from "node:crypto";
import type { Random } from "./random.ts";

export type SeedOperation = {
	owner_id: string;
	operation_id: string;
	owner_name: string;
	name: string;
	county_fips: string;
	contact_name: string;
	email: string;
	language: "en" | "es";
	plantings: { crop_key: string; cultivar: string; bearing_trees: number; young_trees: number; planted_year: number }[];
};

// Invented throughout. Cultivars are plant names.
const given = [
	"Wren",
	"Odile",
	"Tobin",
	"Marisol",
	"Efraín",
	"Lotte",
	"Anselm",
	"Yesenia",
	"Corwin",
	"Petra",
	"Ismael",
	"Hedda",
];
const family = [
	"Quillfeather",
	"Brandmoor",
	"Alcázar",
	"Tindermark",
	"Osterlund",
	"Vallejuelo",
	"Harrowgate",
	"Mossbeck",
	"Peñaloza",
	"Dunmallow",
];
const places = [
	"Quail Bend",
	"Cold Spring",
	"Windy Knob",
	"Otter Slough",
	"Long Ridge",
	"Blue Heron",
	"Stony Ford",
	"Burr Oak",
	"Hollow Lane",
	"Three Elms",
	"Fox Prairie",
	"Sand Bluff",
];
const kinds = ["Orchard", "Orchards", "Fruit Farm", "Fruit", "Acres", "Farm"];
const cultivars: Record<string, readonly string[]> = {
	apple: ["Haralson", "Cortland", "McIntosh", "Jonathan", "Golden Delicious"],
	tart_cherry: ["Montmorency", "Meteor", "North Star"],
	plum: ["Toka", "Underwood", "Alderman"],
	aronia: ["Viking", "Nero"],
	pawpaw: ["Sunflower", "Overleese"],
	hazelnut: ["Seedling hybrid"],
};
// How often each crop is a grower's main one, and its bearing plants at the middle of the size range.
const crops = [
	["apple", 0.56, 220],
	["tart_cherry", 0.14, 130],
	["plum", 0.1, 90],
	["aronia", 0.1, 400],
	["pawpaw", 0.04, 60],
	["hazelnut", 0.06, 300],
] as const;

/** Growers of the demo, gathered in about a quarter of the counties, as fruit is. */
export function inventOperations(random: Random, countyFips: readonly string[], count: number): SeedOperation[] {
	const fruitful = countyFips.filter(() => random.next() < 0.28);
	return Array.from({ length: count }, (_, i): SeedOperation => {
		// Squaring the draw makes the first counties of the list the busiest.
		const county = fruitful[Math.floor(random.next() ** 1.6 * fruitful.length)]!;
		const surname = random.pick(family);
		const contact = `${random.pick(given)} ${surname}`;
		const place = random.pick(places);
		return {
			owner_id: randomUUID(),
			operation_id: randomUUID(),
			owner_name: contact,
			name: random.next() < 0.6 ? `${place} ${random.pick(kinds)}` : `${surname} ${random.pick(kinds)}`,
			county_fips: county,
			contact_name: contact,
			email: `grower${i + 1}@orchard.example`,
			language: random.next() < 0.12 ? "es" : "en",
			plantings: inventPlantings(random),
		};
	});
}

function inventPlantings(random: Random): SeedOperation["plantings"] {
	const size = random.lognormal(1, 1.1);
	const wanted = random.next() < 0.35 ? 1 : random.whole(2, 3);
	return Array.from({ length: wanted }, () => {
		const [cropKey, , median] = pickCrop(random);
		const trees = Math.max(4, Math.round(median * size * random.lognormal(0.5, 0.4)));
		return {
			crop_key: cropKey,
			cultivar: random.pick(cultivars[cropKey]!),
			bearing_trees: trees,
			young_trees: Math.round(trees * 0.2 * random.next()),
			planted_year: random.whole(1985, 2019),
		};
	});
}

function pickCrop(random: Random) {
	let left = random.next();
	return crops.find(([, share]) => (left -= share) < 0) ?? crops[0];
}
