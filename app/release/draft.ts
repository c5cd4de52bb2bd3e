import { z } from "zod";
import { Words } from "#app/lib/words.ts";

/** What a release records of how it was made. Read back from jsonb, so each shape is checked again on the way in. */
export const ReleaseRules = z.object({
	minimumOwners: z.number().int(),
	dominancePercent: z.number(),
	steadyCv: z.number(),
	careCv: z.number(),
	// Rules of a later day: a release made before them was made without.
	largest: z.object({ owners: z.number().int(), percent: z.number() }).nullable().default(null),
	publicFactor: z.number().nullable().default(null),
	// Rules that were frozen before days were told do not say these.
	steadyDays: z.number().default(3),
	careDays: z.number().default(7),
});
export type ReleaseRules = z.infer<typeof ReleaseRules>;

/** A measure as a release records it: what a reader of the figures needs, whatever form asked for it. */
const ReleaseMeasure = z.object({
	key: z.string(),
	kind: z.enum(["ratio", "mean", "total", "proportion", "day"]),
	label: Words,
	description: Words,
	unit: z.enum([
		...(["percent", "percent_of_normal", "lb_per_tree", "lb", "trees", "operations", "score"] as const),
		...(["acres", "fahrenheit", "row_feet", "count", "day"] as const),
	]),
	decimals: z.number().int(),
	worse: z.enum(["more", "less"]).nullable(),
	hue: z.string(),
	acrossCrops: z.boolean(),
	/** The crops that it is told of; drafts made before this was kept do not say. */
	crops: z.array(z.string()).optional(),
	/** Shown value = estimate x scale. */
	scale: z.number(),
});

/** The weights of a crop's answers in one state, or in some that share a stratum; for which measures alike. */
const ReleaseCalibration = z.object({
	measureKeys: z.array(z.string()),
	cropKey: z.string(),
	stateFips: z.array(z.string()),
	respondents: z.number().int(),
	totals: z.array(
		z.object({
			of: z.enum(["district", "stratum", "bearing_trees"]),
			group: z.string(),
			total: z.number(),
			byDesign: z.number(),
		}),
	),
	takenTogether: z.array(z.string()),
	sweeps: z.number().int().nullable(),
	smallest: z.number(),
	largest: z.number(),
	/** Why design weights were kept. */
	fallback: z
		.enum([
			...(["group_without_respondents", "group_without_total", "totals_differ", "totals_contradict"] as const),
			...(["not_converged", "too_few", "extreme_weights", "zero_total"] as const),
		])
		.nullable(),
});

const Counted = z.object({ asked: z.number().int(), answered: z.number().int() });
export const ReleaseMethod = z.object({
	formKey: z.string(),
	season: z.number().int(),
	title: Words,
	openedAt: z.string(),
	closedAt: z.string(),
	all: Counted,
	states: z.array(Counted.extend({ stateFips: z.string() })),
	setAside: z.number().int(),
	joins: z.array(
		z.object({
			measureKey: z.string(),
			cropKey: z.string(),
			stratumKeys: z.array(z.string()),
			step: z.enum(["next_size", "state", "network"]),
		}),
	),
	/** By which weights the figures were made; drafts made before there was a choice do not say. */
	weighting: z.enum(["design", "post_stratified", "raked", "linear"]).default("design"),
	/** How calibrated weights came about, for the desk alone: the totals are of parts of the frame. */
	calibrations: z.array(ReleaseCalibration).default([]),
	measures: z.array(ReleaseMeasure),
	areas: z.array(
		z.object({
			areaKey: z.string(),
			kind: z.enum(["county", "district", "state", "region"]),
			parentKey: z.string().nullable(),
			stateFips: z.string().nullable(),
			name: z.string(),
		}),
	),
	cropKeys: z.array(z.string()),
});
export type ReleaseMethod = z.infer<typeof ReleaseMethod>;

const Widths = z.object({ under1: z.number(), from1to2: z.number(), from2to5: z.number(), from5: z.number() });

/** The audit as published with the release: how much is withheld and how safely, no withheld figure, no cell named. */
export const ReleaseAudit = z.object({
	passed: z.boolean(),
	cells: z.number().int(),
	withheld: z.number().int(),
	withheldForOwnSake: z.number().int(),
	shields: z.number().int(),
	narrowest: z.number().nullable(),
	widths: Widths,
	// Told since a later day.
	byQuantity: z
		.array(
			z.object({ quantity: z.string(), label: Words.optional(), narrowest: z.number().nullable(), widths: Widths }),
		)
		.default([]),
	attackers: z
		.array(
			z.object({
				kind: z.enum(["everybody", "owner", "line", "revision", "other_survey"]),
				tried: z.number().int(),
				failed: z.number().int(),
			}),
		)
		.default([]),
	linearPrograms: z.number().int(),
	seconds: z.number(),
	/** By how much more is lost at most than any safe choice must lose, as a share; 0 is proven least, null is not known. */
	gap: z.number().nullable().default(null),
	/** Cells of which other surveys of the season tell, so that this release has less to keep. */
	knownElsewhere: z.number().int().default(0),
	/** Releases of other surveys of the season that there were when it was made. */
	heldAgainst: z.array(z.string()).default([]),
	failures: z.array(
		z.object({
			cellKey: z.string(),
			quantity: z.string().nullable(),
			kind: z.string(),
			/** Whether it stands with everything withheld, since it is known from elsewhere. */
			beyondHelp: z.boolean().optional(),
		}),
	),
});
export type ReleaseAudit = z.infer<typeof ReleaseAudit>;

/** How far the job is that makes a draft. */
export const DraftProgress = z.object({
	phase: z.enum(["choosing", "joining", "auditing"]),
	/** parts of the table whose shields are chosen */
	done: z.number().int(),
	total: z.number().int(),
	gap: z.number().nullable(),
});
export type DraftProgress = z.infer<typeof DraftProgress>;

export const Steadiness = z.enum(["steady", "care", "rough"]);

/** One figure of a shown cell, in the measure's unit. Rough figures keep their place and lose their numbers. */
export const DraftFigure = z.object({
	measureKey: z.string(),
	value: z.number().nullable(),
	standardError: z.number().nullable(),
	cv: z.number().nullable(),
	lower: z.number().nullable(),
	upper: z.number().nullable(),
	steadiness: Steadiness,
	/** Of a measure of days alone, whose value is the median. */
	quartiles: z.object({ first: z.number(), third: z.number() }).optional(),
});
export type DraftFigure = z.infer<typeof DraftFigure>;

export type DraftCell = {
	cropKey: string;
	areaKey: string;
	status: "shown" | "withheld" | "no_growers";
	/** Why it is withheld; for the desk only. */
	reasons: string[];
	respondents: number | null;
	figures: DraftFigure[] | null;
};

/**
 * The band in which a count of respondents lies. Only the band is published: exact counts of two releases could be
 * subtracted. Bands are our own; they begin at the smallest count that may be shown at all (3).
 */
export function respondentsBand(respondents: number): string {
	if (respondents < 3) throw new RangeError(`a cell with ${respondents} respondents is never shown`);
	const bands = [
		[3, 4],
		[5, 9],
		[10, 19],
		[20, 49],
		[50, 99],
		[100, 199],
		[200, 499],
	] as const;
	const band = bands.find(([, last]) => respondents <= last);
	return band ? `${band[0]}-${band[1]}` : "500+";
}

/**
 * A figure as it is published: the value rounded to the measure's decimals, the interval outwards to the same, so that
 * rounding never makes it look surer. Quartiles are days that were told, and whole already. A rough figure has no number.
 */
export function publishedFigure(figure: DraftFigure, decimals: number): DraftFigure {
	if (figure.steadiness === "rough" || figure.value === null) {
		return {
			measureKey: figure.measureKey,
			value: null,
			standardError: null,
			cv: null,
			lower: null,
			upper: null,
			steadiness: "rough",
		};
	}
	const power = 10 ** decimals;
	const tidy = (value: number) => Number(value.toFixed(decimals + 2));
	// 14.000000000000002 is 14: an end is only pushed outwards when it really lies beyond the last digit kept.
	const outwards = (value: number | null, round: (value: number) => number) =>
		value === null ? null : round(Number((value * power).toFixed(6))) / power;
	return {
		measureKey: figure.measureKey,
		value: Math.round(figure.value * power) / power,
		standardError: figure.standardError === null ? null : tidy(figure.standardError),
		cv: figure.cv === null ? null : Number(figure.cv.toFixed(3)),
		lower: outwards(figure.lower, Math.floor),
		upper: outwards(figure.upper, Math.ceil),
		steadiness: figure.steadiness,
		...(figure.quartiles && { quartiles: figure.quartiles }),
	};
}
