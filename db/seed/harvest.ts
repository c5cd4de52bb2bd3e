import type { CropKey } from "#app/directory/crops.ts";
import type { Place } from "./places.ts";
import { seededRandom, type Random } from "./random.ts";
import { freezeAt, type Season } from "./seasons.ts";
import type { SeedPlanting } from "./operations.ts";

/** What one planting bore in a season, as its grower will tell it. In pounds, before anybody rounds. */
export type Harvest = { planting: SeedPlanting; normalLb: number; harvestedLb: number; lostToFreezeLb: number };

type CropTraits = {
	/** Pounds of a bearing plant in a normal year, by and large. */
	normalLb: number;
	/** How much of a year's usual losses reaches it. */
	usual: number;
	/** How much of a freeze's damage reaches it: one that blooms late or bears on new wood suffers less. */
	tender: number;
	/** Day of the year on which picking begins at 43 degrees north, and how long it goes on. */
	firstDay: number;
	pickingDays: number;
};
/** Invented, to the size that a reader of the trade would expect; nobody should take them for a yield table. */
const traits: Record<CropKey, CropTraits> = {
	apple: { normalLb: 130, usual: 1.1, tender: 1, firstDay: 246, pickingDays: 38 },
	tart_cherry: { normalLb: 48, usual: 0.9, tender: 0.96, firstDay: 189, pickingDays: 14 },
	plum: { normalLb: 55, usual: 0.85, tender: 1, firstDay: 226, pickingDays: 20 },
	aronia: { normalLb: 11, usual: 0.7, tender: 0.55, firstDay: 236, pickingDays: 16 },
	pawpaw: { normalLb: 20, usual: 0.8, tender: 0.8, firstDay: 251, pickingDays: 18 },
	hazelnut: { normalLb: 5, usual: 0.75, tender: 0.7, firstDay: 245, pickingDays: 24 },
};

/** Where so much of the blossom is killed, nobody goes out to pick the rest. */
const everythingFrom = 0.88;

/** What an operation's plantings bore. A planting's normal crop stays its own over the seasons; its grower's memory wavers. */
export function inventHarvest(random: Random, season: Season, place: Place, plantings: SeedPlanting[]): Harvest[] {
	// Low ground or a hill, fires or none: neighbours fare differently in one night.
	const shelter = random.normal() * 0.55;
	return plantings.map((planting) => {
		const { normalLb, usual: share, tender } = traits[planting.crop_key];
		const ownYield = seededRandom(`normal ${planting.planting_id}`).lognormal(1, 0.28);
		const normal = planting.bearing_trees * normalLb * ownYield * random.lognormal(1, 0.05);
		const usual =
			season.usualLoss * share * unevenness(season, place) * random.lognormal(0.85, 0.75) -
			0.06 * Math.max(0, random.normal());
		const frozen = sheltered(Math.min(0.97, freezeAt(season, place) * tender), shelter + random.normal() * 0.25);
		const lost = frozen > everythingFrom ? 1 : Math.min(1, 1 - (1 - Math.min(0.9, usual)) * (1 - frozen));
		return {
			planting,
			normalLb: normal,
			harvestedLb: normal * (1 - lost),
			lostToFreezeLb: lost > 0 ? normal * Math.min(lost, lost === 1 ? 0.97 : frozen) : 0,
		};
	});
}

/** How a year's usual losses differ from place to place: rain, hail and disease come in patches. Around 1. */
function unevenness({ season }: Season, { longitude, latitude }: Place): number {
	return 1 + 0.55 * Math.sin(longitude * 1.9 + season * 2.1) * Math.sin(latitude * 1.7 + season);
}

/** Moves a share on the logit scale, so that it stays between 0 and 1; next to nothing stays next to nothing. */
function sheltered(share: number, by: number): number {
	if (share < 0.01) return 0;
	const logit = Math.log(share / (1 - share)) + by;
	return 1 / (1 + Math.exp(-logit));
}

/** First and last day of picking over all crops that gave any, as days of the year; null where none did. */
export function inventPicking(
	random: Random,
	season: Season,
	place: Place,
	harvests: Harvest[],
): { first: number; last: number } | null {
	const picked = harvests.filter(({ harvestedLb }) => harvestedLb > 0).map(({ planting }) => traits[planting.crop_key]);
	if (picked.length === 0) return null;
	const shift = Math.round((place.latitude - 43) * 3 + season.late + random.normal() * 4);
	const first = Math.min(...picked.map(({ firstDay }) => firstDay));
	const last = Math.max(...picked.map(({ firstDay, pickingDays }) => firstDay + pickingDays));
	return { first: first + shift, last: last + shift + Math.round(Math.abs(random.normal()) * 3) };
}
