/** One respondent of a stratified sample: which stratum (an index) and how many operations it stands for. */
export type SampledOperation = { stratum: number; weight: number };

/**
 * A stratified sample, respondent by respondent. Calibrated weights differ from one to the next within a stratum, so that
 * sums by stratum do not suffice. `samplingFractions` holds n_h / N_h of each stratum; 0 leaves out the correction.
 */
export type Sample = { operations: readonly SampledOperation[]; samplingFractions: readonly number[] };

/** Weights that meet known totals, and what the totals do not explain. */
export type Calibration = {
	/** In the order of the sample's operations. */
	weights: number[];
	/** Each weight over the one before calibration. Linear calibration can take one below 0. */
	factors: number[];
	/**
	 * What remains of values, one an operation, once the known totals have explained what they can: residuals of the
	 * regression on what was calibrated to. Their variance is the calibrated estimate's.
	 */
	unexplained(values: readonly number[]): number[];
	/** How often all margins were gone through until they were met; 0 for what is solved at once. */
	sweeps: number;
};

/**
 * Why weights could not be had: a group with a total but no respondent, or with respondents and no total (or one of 0);
 * margins whose totals differ; totals that no weights can meet together; or no agreement within the sweeps allowed.
 */
export type CalibrationProblem =
	"group_without_respondents" | "group_without_total" | "totals_differ" | "totals_contradict" | "not_converged";

/** The known totals given cannot be met. The message says which, for the log; `problem` is for words in a page. */
export class CalibrationError extends Error {
	constructor(
		readonly problem: CalibrationProblem,
		message: string,
	) {
		super(message);
		this.name = "CalibrationError";
	}
}

/** @throws {RangeError} when a weight is not above 0 or a stratum is not there. */
export function requireSample({ operations, samplingFractions }: Sample): void {
	for (const { stratum, weight } of operations) {
		if (!(weight > 0 && Number.isFinite(weight))) throw new RangeError(`an operation cannot have weight ${weight}`);
		const fraction = samplingFractions[stratum];
		if (fraction === undefined || !(fraction >= 0 && fraction <= 1)) {
			throw new RangeError(`stratum ${stratum} cannot have sampling fraction ${fraction}`);
		}
	}
}
