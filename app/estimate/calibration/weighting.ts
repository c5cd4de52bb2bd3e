import type { CalibrationProblem } from "#app/estimate/calibration/calibration.ts";

export type { Weighting } from "#app/collect/weighting.ts";

/**
 * Where calibration stops. A weight may become three times or a third of what it was; a district needs five answers to be
 * counted by itself; a state ten, and three for each total that it is to meet. Common practice, no source.
 */
export const calibrationLimits = Object.freeze({
	lowestFactor: 1 / 3,
	highestFactor: 3,
	fewestInDistrict: 5,
	fewestAnswers: 10,
	fewestPerTotal: 3,
});

/** Why design weights were kept: what `CalibrationProblem` says, too few answers, weights too far off, or nothing known. */
export type Fallback = CalibrationProblem | "too_few" | "extreme_weights" | "zero_total";

/** A total over the frame's strata in which not everybody answered, for weights to meet. `group` is a district's key or `rest`, strata joined by +, or states. */
export type KnownTotal = {
	of: "district" | "stratum" | "bearing_trees";
	group: string;
	total: number;
	/** What design weights make of it. */
	byDesign: number;
};

/** How the weights of one state came about, or of the states that share a stratum. */
export type CalibrationNote = {
	stateFips: string[];
	/** Answers whose weights could change: those of strata in which not everybody answered. */
	respondents: number;
	totals: KnownTotal[];
	/** Districts that had too few answers, counted together with the counties of none. */
	takenTogether: string[];
	/** Of post-stratification and raking: how often all margins were gone through. Null where design weights were kept. */
	sweeps: number | null;
	/** The smallest and largest of new over design weights; 1 where these were kept. */
	smallest: number;
	largest: number;
	fallback: Fallback | null;
};
