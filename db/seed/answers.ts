import type { Answer } from "#app/collect/form.ts";
import { parseTypedNumber } from "#app/collect/typed-number.ts";
import { fromCanonical, toCanonical, unitsFor } from "#app/collect/units.ts";
import { crops } from "#app/directory/crops.ts";
import { type Harvest, inventHarvest, inventPicking } from "./harvest.ts";
import type { SeedOperation } from "./operations.ts";
import type { Place } from "./places.ts";
import { pickWeighted, type Random, seededRandom } from "./random.ts";
import { freezeAt, type Season } from "./seasons.ts";
import { comments, freezeComments, otherCauseWords } from "./words.ts";

const bushelOf = new Map(crops.map(({ cropKey, bushelLb }) => [cropKey, bushelLb]));

/**
 * One operation's answers to the form "after harvest", as its pages would store them.
 * @param until the day (YYYY-MM-DD) on which they are sent in: nobody tells of a harvest day to come.
 */
export function inventAnswers(
	random: Random,
	season: Season,
	operation: SeedOperation,
	place: Place,
	until: string,
): Answer[] {
	const harvests = inventHarvest(random, season, place, operation.plantings).map((harvest) =>
		tell(random, operation, harvest),
	);
	const causesTold = causeAnswers(random, season, harvests);
	return [
		...harvests.flatMap(({ answers }) => answers),
		...causesTold,
		...dayAnswers(random, season, place, harvests, until),
		...nextYearAnswers(random, season, operation, place, harvests),
		...otherCauseTold(season, operation, causesTold),
	];
}

/** What else took fruit, in words, of most who told that something else did. Drawn apart, so that nothing else changes by it. */
function otherCauseTold({ season }: Season, { operation_id, language }: SeedOperation, told: Answer[]): Answer[] {
	const other = told.find(({ questionKey }) => questionKey === "cause_other");
	const own = seededRandom(`other cause ${season} ${operation_id}`);
	if (typeof other?.value !== "number" || other.value === 0 || own.chance(0.2)) return [];
	return [plain("other_cause", own.pick(otherCauseWords[language]))];
}

type Told = Harvest & { answers: Answer[] };

/** A planting's three numbers in the grower's unit and roundness; `Harvest` then holds what was told, in pounds. */
function tell(random: Random, operation: SeedOperation, harvest: Harvest): Told {
	const { planting } = harvest;
	const bushelLb = bushelOf.get(planting.crop_key) ?? null;
	const sizes = { bushelLb, crateLb: null };
	const unit = unitsFor("mass", bushelLb).includes(operation.mass_unit) ? operation.mass_unit : "lb";
	const mass = (questionKey: string, pounds: number): Answer & { value: number } => {
		const typed = typedNumber(random, fromCanonical(pounds, unit, sizes));
		const read = parseTypedNumber(typed, operation.language);
		if (!read.ok) throw new Error(`the demo types "${typed}", which is no number`);
		const value = toCanonical(read.value, unit, sizes);
		return { questionKey, plantingId: planting.planting_id, kind: "given", value, given: { text: typed, unit } };
	};
	const trees = planting.bearing_trees;
	const normal = mass("normal_crop", harvest.normalLb);
	const harvested = mass("harvested", harvest.harvestedLb);
	const silence = pickWeighted<Answer["kind"]>(random, [
		["given", 0.97],
		["dont_know", 0.02],
		["refused", 0.01],
	]);
	return {
		...harvest,
		normalLb: normal.value,
		harvestedLb: harvested.value,
		answers: [
			given("bearing_trees", trees, `${trees}`, planting.planting_id),
			normal,
			silence === "given" ? harvested : { ...harvested, kind: silence, value: null, given: null },
		],
	};
}

/** A number as a grower says it: round, some with a comma for the thousands. What is left of a crop is never rounded to 0. */
function typedNumber(random: Random, amount: number): string {
	if (amount <= 0) return "0";
	const steps = [
		[10_000, 500],
		[1_000, 50],
		[200, 10],
		[60, 5],
		[10, 1],
		[2, 0.5],
		[0, 0.1],
	] as const;
	const step = steps.find(([from]) => amount >= from)![1];
	const rounded = Number((Math.max(1, Math.round(amount / step)) * step).toFixed(1));
	return rounded >= 1000 && random.chance(0.6) ? rounded.toLocaleString("en-US") : `${rounded}`;
}

const otherCauses = [
	["cause_poor_pollination", 0.18],
	["cause_hail_wind", 0.12],
	["cause_drought_heat", 0.18],
	["cause_too_wet", 0.12],
	["cause_disease", 0.22],
	["cause_pests", 0.26],
	["cause_other", 0.08],
] as const;

const causes = ["cause_freeze", ...otherCauses.map(([key]) => key)];

/** What took the fruit, in steps of five that add up to a hundred; a box left blank beside others took nothing. */
function causeAnswers(random: Random, season: Season, told: Told[]): Answer[] {
	const isShort = ({ answers, normalLb, harvestedLb }: Told) =>
		answers.every(({ kind }) => kind === "given") && harvestedLb < normalLb;
	const short = told.filter(isShort);
	if (short.length === 0) return [];
	const silence = pickWeighted(random, [
		["given", 0.94],
		["skipped", 0.03],
		["dont_know", 0.02],
		["refused", 0.01],
	] as const);
	if (silence === "skipped") return [];
	if (silence !== "given") {
		return ["cause_freeze", ...otherCauses.map(([key]) => key)].map((questionKey): Answer => ({
			questionKey,
			plantingId: null,
			kind: silence,
			value: null,
			given: null,
		}));
	}
	const lost = short.reduce((sum, { normalLb, harvestedLb }) => sum + normalLb - harvestedLb, 0);
	const frozen = short.reduce((sum, { lostToFreezeLb }) => sum + lostToFreezeLb, 0);
	const freeze = Math.min(100, Math.round((20 * frozen) / lost) * 5);
	const shares = new Map<string, number>(freeze > 0 ? [["cause_freeze", freeze]] : []);
	const kinds = random.whole(1, 3);
	for (let left = 100 - freeze, i = 1; left > 0; i++) {
		const share = i >= kinds ? left : Math.max(5, Math.round((left * random.next()) / 5) * 5);
		const cause = pickWeighted(random, otherCauses);
		shares.set(cause, (shares.get(cause) ?? 0) + share);
		left -= share;
	}
	return causes.map((key) => given(key, shares.get(key) ?? 0, shares.has(key) ? `${shares.get(key)}` : ""));
}

function dayAnswers(random: Random, season: Season, place: Place, told: Told[], until: string): Answer[] {
	const picking = inventPicking(random, season, place, told);
	if (!picking || random.chance(0.07)) return [];
	const dayOf = (day: number) => new Date(Date.UTC(season.season, 0, day)).toISOString().slice(0, 10);
	const answers = [plain("first_harvest", dayOf(picking.first)), plain("last_harvest", dayOf(picking.last))];
	return answers.filter(({ value }) => String(value) <= until);
}

function nextYearAnswers(
	random: Random,
	season: Season,
	operation: SeedOperation,
	place: Place,
	told: Told[],
): Answer[] {
	const normal = told.reduce((sum, { normalLb }) => sum + normalLb, 0);
	const borne = normal > 0 ? told.reduce((sum, { harvestedLb }) => sum + harvestedLb, 0) / normal : 1;
	// A tree that carried little this year sets many buds for the next.
	const look = 1 - borne + random.normal() * 0.25;
	const buds = look > 0.65 ? "heavy" : look > -0.05 ? "normal" : look > -0.35 ? "light" : "none";
	const answers: Answer[] = random.chance(0.1)
		? []
		: [random.chance(0.05) ? silent("bud_set", "dont_know") : plain("bud_set", buds)];
	if (random.chance(0.07)) {
		const frozen = freezeAt(season, place) > 0.4;
		answers.push(plain("comment", random.pick((frozen ? freezeComments : comments)[operation.language])));
	}
	return answers;
}

function given(questionKey: string, value: number, text: string, plantingId: string | null = null): Answer {
	return { questionKey, plantingId, kind: "given", value, given: { text } };
}

/** A day, a choice or a text is kept as it was given. */
function plain(questionKey: string, value: string): Answer {
	return { questionKey, plantingId: null, kind: "given", value, given: null };
}

function silent(questionKey: string, kind: "dont_know" | "refused"): Answer {
	return { questionKey, plantingId: null, kind, value: null, given: null };
}
