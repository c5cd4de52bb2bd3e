import { domainDegreesOfFreedom, domainTotals, strataWithin, type StratumTally } from "#app/estimate/domain.ts";
import { estimateOf, type Figure } from "#app/estimate/estimators.ts";
import { normalInterval, proportionInterval, type Interval } from "#app/estimate/interval.ts";
import { linearize, type EstimateKind } from "#app/estimate/linearize.ts";
import { steadiness, type Steadiness, type SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import type { Join, StrataFrame } from "#app/estimate/strata.ts";

export type { EstimateKind };

/** `range` holds the values that are possible at all; an interval is cut off there. Left out: none is impossible. */
export type EstimatedMeasure = { kind: EstimateKind; range?: { lowest?: number; highest?: number } };

/** Why a value or a standard error is missing. */
export type Missing = "no_respondents" | "one_respondent" | "no_base";

/** A figure for one measure, crop and area. All of it in the units of the value, but `cv`, a fraction. */
export type Estimate = {
	value: number | null;
	standardError: number | null;
	cv: number | null;
	/** Ends of the 95 percent interval; null where there is none, as where answers of a part all agree. */
	lower: number | null;
	upper: number | null;
	/** Operations of the area that answered. Owners are counted in protect. */
	respondents: number;
	steadiness: Steadiness;
	/** Strata joined among those that hold the area's respondents. */
	joins: Join[];
	missing: Missing | null;
};

/**
 * The estimate of one measure and crop in one area, from the area's tallies alone.
 * @param frame the joined strata of the whole network for this measure and crop (`joinStrata`).
 * @param tallies the area's tally rows of this measure and crop.
 * @param cutOffs the network's setting for steadiness.
 * @returns value in units of y (total, mean) or y per unit of x (ratio, proportion: a fraction). Null means that no such
 *   value exists, and `missing` says why: nobody answered, X is 0, or one operation answered, whose answer has no
 *   spread to judge by. Never NaN.
 * @throws {RangeError} when tallies and frame do not fit each other, or a proportion leaves 0 to 1.
 */
export function estimateCell(
	measure: EstimatedMeasure,
	frame: StrataFrame,
	tallies: Iterable<StratumTally>,
	cutOffs?: SteadinessCutOffs,
): Estimate {
	const rows = [...tallies].filter((tally) => tally.n > 0);
	const strata = strataWithin(frame, rows);
	return cellOf(
		measure,
		{
			respondents: domainTotals(strata).respondents,
			joins: joinsAmong(frame, new Set(rows.map((tally) => tally.stratumKey))),
			everybody: strata.every((stratum) => stratum.samplingFraction === 1),
			freedom: domainDegreesOfFreedom(strata),
			value: () => linearize(measure.kind, strata)?.value ?? null,
			figure: () => estimateOf(measure.kind, strata),
		},
		cutOffs,
	);
}

/** The joins among strata that hold an area's answers. */
export function joinsAmong({ joins }: StrataFrame, stratumKeys: ReadonlySet<string>): Join[] {
	return joins.filter((join) => join.stratumKeys.some((key) => stratumKeys.has(key)));
}

/** What an estimate is made of, by whichever weights. `everybody`: all of the strata that hold the area's answers answered. */
export type CellParts = {
	respondents: number;
	joins: Join[];
	everybody: boolean;
	/** Respondents of the area less the strata that hold them. */
	freedom: number;
	/** Without its variance, which the stratum of a lone respondent need not have; null where there is nothing to divide by. */
	value: () => number | null;
	figure: () => Figure | null;
};

/** An estimate as it may be leant on: see `estimateCell`. */
export function cellOf(measure: EstimatedMeasure, parts: CellParts, cutOffs?: SteadinessCutOffs): Estimate {
	const { respondents, joins, everybody } = parts;
	const empty = { value: null, standardError: null, cv: null, lower: null, upper: null, steadiness: "rough" } as const;
	if (respondents === 0) return { ...empty, respondents, joins, missing: "no_respondents" };
	if (respondents === 1) {
		const value = parts.value();
		return { ...empty, value, respondents, joins, missing: value === null ? "no_base" : "one_respondent" };
	}
	const figure = settled(measure.kind, parts.figure());
	if (!figure) return { ...empty, respondents, joins, missing: "no_base" };

	const { value, standardError } = figure;
	const cv = value === 0 ? null : standardError / Math.abs(value);
	const interval = everybody ? { lower: value, upper: value } : intervalOf(measure.kind, figure, parts);
	return {
		value,
		standardError,
		cv,
		...clip(interval, measure.range),
		respondents,
		steadiness: steadiness({ cv, standardError, everybody }, cutOffs),
		joins,
		missing: null,
	};
}

function settled(kind: EstimateKind, figure: Figure | null): Figure | null {
	// Weighted sums of parts that are the whole can come out a rounding above it.
	if (kind === "proportion" && figure && Math.abs(figure.value - 1) < 1e-12) return { ...figure, value: 1 };
	return figure;
}

function intervalOf(
	kind: EstimateKind,
	figure: Figure,
	{ freedom, respondents }: Pick<CellParts, "freedom" | "respondents">,
): Interval | null {
	// Answers that all agree do not prove that the others agree too: ends at the value itself would say so.
	const agreed = figure.standardError === 0;
	// Where everybody or nobody has it, the exact interval still tells how far others may differ.
	if (kind === "proportion" && (!agreed || figure.value === 0 || figure.value === 1))
		return proportionInterval(figure, freedom, respondents);
	return agreed ? null : normalInterval(figure);
}

function clip(
	interval: Interval | null,
	{ lowest = -Infinity, highest = Infinity }: { lowest?: number; highest?: number } = {},
): { lower: number | null; upper: number | null } {
	if (!interval) return { lower: null, upper: null };
	return { lower: Math.max(lowest, interval.lower), upper: Math.min(highest, interval.upper) };
}
