import type { Answer } from "#app/collect/form.ts";
import type { CropKey } from "#app/directory/crops.ts";
import { dateOfDay } from "#app/lib/day-of-year.ts";
import type { SeedOperation, SeedPlanting } from "./operations.ts";
import type { Place } from "./places.ts";
import { pickWeighted, type Random, seededRandom } from "./random.ts";
import type { Season } from "./seasons.ts";

/**
 * Days of the year on which the crop's first flowers open at 43 degrees north in a usual spring, and how many days it takes
 * from there to full bloom and to petal fall. Invented, to the size that a reader of the trade would expect.
 */
const traits: Record<CropKey, { first: number; full: number; fallen: number }> = {
	apple: { first: 127, full: 5, fallen: 14 },
	tart_cherry: { first: 121, full: 4, fallen: 12 },
	plum: { first: 118, full: 4, fallen: 11 },
	aronia: { first: 136, full: 5, fallen: 15 },
	pawpaw: { first: 128, full: 8, fallen: 20 },
	hazelnut: { first: 96, full: 6, fallen: 18 },
};
/** A degree farther north blooms so many days later. */
const daysPerDegree = 3.6;

/**
 * One operation's answers to the form "bloom watch", as its pages would store them.
 * @param until the day (YYYY-MM-DD) on which they are sent in: nobody tells of a bloom to come.
 */
export function inventBloom(
	random: Random,
	season: Season,
	operation: SeedOperation,
	place: Place,
	until: string,
): Answer[] {
	// A slope, a lake, a low field: an operation's plantings all bloom a little earlier or later than its neighbours'.
	const site = seededRandom(`bloom ${operation.operation_id}`).normal() * 1.6;
	const spring = season.late + (place.latitude - 43) * daysPerDegree + site;
	const weather = pickWeighted(random, [
		["poor", 0.28],
		["mixed", 0.4],
		["good", 0.32],
	] as const);
	const plantings = operation.plantings.map((planting) => bloomOf(random, season, planting, spring, until));
	const anyBloom = plantings.some(([density]) => density?.value !== "none");
	return [...plantings.flat(), ...(anyBloom ? [told("bee_weather", weather)] : [])];
}

function bloomOf(random: Random, season: Season, planting: SeedPlanting, spring: number, until: string): Answer[] {
	const { first, full, fallen } = traits[planting.crop_key];
	const id = planting.planting_id;
	const density = pickWeighted(random, [
		["none", 0.02],
		["light", season.lightBloom],
		["normal", 0.8 - 0.8 * season.lightBloom],
		["heavy", 0.18 - 0.2 * season.lightBloom],
	] as const);
	const opened = Math.round(first + spring + random.normal() * 1.2);
	const days = [
		["first_bloom", opened],
		["full_bloom", opened + full + random.whole(-1, 1)],
		["petal_fall", opened + fallen + random.whole(-2, 2)],
	] as const;
	const noted = density === "none" ? [] : days.filter(() => random.chance(0.93));
	const dates = noted.map(([key, day]) => told(key, dateOfDay(season.season, day)!, id));
	return [told("bloom_density", density, id), ...dates.filter(({ value }) => String(value) <= until)];
}

/** A day or a choice is kept as it was given. */
function told(questionKey: string, value: string, plantingId: string | null = null): Answer {
	return { questionKey, plantingId, kind: "given", value, given: null };
}
