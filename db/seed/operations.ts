import type { CropKey } from "#app/directory/crops.ts";
import type { MassUnit } from "#app/collect/units.ts";
import { type Place, weighPlaces } from "./places.ts";
import { pickWeighted, type Random } from "./random.ts";
import { familyNames, givenNames, operationKinds, placeNames } from "./words.ts";

export type SeedPlanting = {
	planting_id: string;
	crop_key: CropKey;
	cultivar: string;
	bearing_trees: number;
	young_trees: number;
	planted_year: number;
};
export type SeedOperation = {
	owner_id: string;
	operation_id: string;
	owner_name: string;
	name: string;
	county_fips: string;
	contact_name: string;
	email: string;
	phone: string | null;
	language: "en" | "es";
	mass_unit: MassUnit;
	plantings: SeedPlanting[];
};

const cultivars: Record<CropKey, readonly string[]> = {
	apple: ["Haralson", "Cortland", "McIntosh", "Jonathan", "Golden Delicious"],
	tart_cherry: ["Montmorency", "Meteor", "North Star"],
	plum: ["Toka", "Underwood", "Alderman"],
	aronia: ["Viking", "Nero"],
	pawpaw: ["Sunflower", "Overleese"],
	hazelnut: ["Seedling hybrid"],
};
/** How often each crop is planted, and its bearing plants at the middle of the size range. */
const crops: readonly (readonly [CropKey, share: number, median: number])[] = [
	["apple", 0.56, 220],
	["tart_cherry", 0.14, 130],
	["plum", 0.1, 90],
	["aronia", 0.1, 400],
	["pawpaw", 0.04, 60],
	["hazelnut", 0.06, 300],
];
/** Where a crop is planted more, or less, than elsewhere, by state. */
const liking: Record<string, Partial<Record<CropKey, number>>> = {
	"17": { pawpaw: 2, hazelnut: 0.5, aronia: 0.6 },
	"19": { aronia: 1.8, plum: 0.6, tart_cherry: 0.8 },
	"27": { tart_cherry: 0.6, plum: 2, pawpaw: 0, hazelnut: 1.4 },
	"55": { tart_cherry: 1.5, pawpaw: 0.2, hazelnut: 1.2 },
};
/** How often an owner of one operation, of two and of three has another. */
const another = [0, 0.04, 0.35, 0.25];

/** Growers of the demo, gathered in some counties, as fruit is; some owners hold two to four operations near each other. */
export function inventOperations(random: Random, places: readonly Place[], count: number): SeedOperation[] {
	const weighed = weighPlaces(places);
	const operations: SeedOperation[] = [];
	let held = 0;
	while (operations.length < count) {
		const before = operations.at(-1);
		const next = inventOperation(random, pickWeighted(random, weighed).countyFips, operations.length + 1);
		if (before && random.chance(another[held] ?? 0)) {
			held += 1;
			operations.push({ ...next, ...holderOf(before), county_fips: nearOf(random, before, next) });
		} else {
			held = 1;
			operations.push(next);
		}
	}
	return operations;
}

function inventOperation(random: Random, county: string, number: number): SeedOperation {
	const surname = random.pick(familyNames);
	const contact = `${random.pick(givenNames)} ${surname}`;
	const place = random.pick(placeNames);
	return {
		owner_id: random.uuid(),
		operation_id: random.uuid(),
		owner_name: contact,
		name: `${random.chance(0.6) ? place : surname} ${random.pick(operationKinds)}`,
		county_fips: county,
		contact_name: contact,
		email: `grower${number}@orchard.example`,
		phone: phoneOf(county.slice(0, 2), number),
		language: random.chance(0.12) ? "es" : "en",
		mass_unit: pickWeighted(random, [
			["bu", 0.5],
			["lb", 0.42],
			["ton", 0.05],
			["kg", 0.03],
		]),
		plantings: inventPlantings(random, county.slice(0, 2)),
	};
}

function holderOf({ owner_id, owner_name, contact_name, language, mass_unit }: SeedOperation) {
	return { owner_id, owner_name, contact_name, language, mass_unit };
}

/** Area codes of each state; in each, a hundred numbers are kept for invented people. */
const areaCodes: Record<string, readonly string[]> = {
	"17": ["217", "309", "618", "779", "815"],
	"19": ["319", "515", "563", "641", "712"],
	"27": ["218", "320", "507", "651", "763"],
	"55": ["262", "414", "608", "715", "920"],
};

/** A number that no other operation has, as far as such numbers go; nobody knows those of the others. */
function phoneOf(stateFips: string, number: number): string | null {
	const areaCode = areaCodes[stateFips]?.[Math.floor(number / 100)];
	return areaCode === undefined ? null : `${areaCode} 555 01${String(number % 100).padStart(2, "0")}`;
}

/** An owner's next operation lies in the same county, or else in another of the same state. */
function nearOf(random: Random, before: SeedOperation, next: SeedOperation): string {
	const inState = before.county_fips.slice(0, 2) === next.county_fips.slice(0, 2);
	return inState && random.chance(0.5) ? next.county_fips : before.county_fips;
}

function inventPlantings(random: Random, stateFips: string): SeedPlanting[] {
	const size = random.lognormal(1, 0.85);
	const wanted = random.chance(0.28) ? 1 : random.whole(2, 3);
	const choice = crops.map((crop): [(typeof crops)[number], number] => [
		crop,
		crop[1] * (liking[stateFips]?.[crop[0]] ?? 1),
	]);
	return Array.from({ length: wanted }, () => {
		const [cropKey, , median] = pickWeighted(random, choice);
		const trees = Math.max(4, Math.round(median * size * random.lognormal(0.5, 0.4)));
		return {
			planting_id: random.uuid(),
			crop_key: cropKey,
			cultivar: random.pick(cultivars[cropKey]),
			bearing_trees: trees,
			young_trees: Math.round(trees * 0.2 * random.next()),
			planted_year: random.whole(1985, 2019),
		};
	});
}
