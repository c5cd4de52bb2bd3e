import type { DomainStratum } from "#app/estimate/domain.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { linearize, type EstimateKind, type Linearized } from "#app/estimate/linearize.ts";
import { linearizedVariance, residualMoments } from "#app/estimate/variance.ts";

/** What one more answer from a stratum would do for a figure. */
export type Gain = {
	/** What it takes off the variance, in units of the figure squared. */
	reduction: number;
	/** The figure's standard error with that one answer more. */
	standardErrorAfter: number;
	/** The reduction that one attempt can be expected to bring: times the stratum's response rate. */
	perAttempt: number;
	/** The s² of the residuals, in units of the figure squared: the variance of what one operation adds to its error. */
	residualVariance: number;
	/** The stratum has one respondent, and its spread was taken from the others'. */
	borrowed: boolean;
};

/**
 * Where one more answer is worth most: what it takes off the variance of a figure, stratum by stratum. Spread, figure and
 * base are held as they are now. A stratum in which everybody answered has nothing left to gain; one with a single
 * respondent borrows the spread of the others, pooled.
 * @param strata every stratum of the design with respondents; `responseRate` is the share of attempts that bring an
 *   answer, 1 unless given.
 * @returns gains in the order of the strata; null where there is nothing to estimate, or no stratum has two respondents
 *   to show any spread.
 * @throws {RangeError} as `linearizedVariance` does, but for a lone respondent, or when a response rate leaves 0 to 1.
 * Source: Cochran, Sampling Techniques (1977), chapter 5, from memory; formula 21 of the reference set, the exact form.
 */
export function gainsOfOneMore(
	kind: EstimateKind,
	strata: readonly (DomainStratum & { responseRate?: number })[],
): { figure: Figure; gains: Gain[] } | null {
	const linearized = linearize(kind, strata);
	const pooled = linearized && pooledVariance(strata, linearized);
	if (!linearized || pooled === null) return null;
	const variance = linearizedVariance(strata, linearized, "as_others");
	const gains = strata.map((stratum): Gain => {
		const { weight, samplingFraction, respondents, responseRate = 1 } = stratum;
		if (!(responseRate >= 0 && responseRate <= 1)) throw new RangeError(`${responseRate} is not a response rate`);
		const borrowed = respondents === 1 && samplingFraction < 1;
		const own = borrowed ? pooled : residualVariance(stratum, linearized);
		// N² s² / (n (n + 1)), with N = w n. Full counts have no more to ask.
		const open = samplingFraction === 1 ? 0 : 1;
		const reduction = (open * weight ** 2 * own * respondents) / (respondents + 1);
		const standardErrorAfter = Math.sqrt(Math.max(0, variance - reduction));
		return { reduction, standardErrorAfter, perAttempt: responseRate * reduction, residualVariance: own, borrowed };
	});
	return { figure: { value: linearized.value, standardError: Math.sqrt(variance) }, gains };
}

/** Variance of the scaled residuals over all respondents of a stratum; 0 for one respondent of one. */
function residualVariance(stratum: DomainStratum, linearized: Linearized): number {
	const { spread } = residualMoments(stratum, linearized);
	return spread / Math.max(1, stratum.respondents - 1) / linearized.scale ** 2;
}

function pooledVariance(strata: readonly DomainStratum[], linearized: Linearized): number | null {
	const several = strata.filter((stratum) => stratum.respondents > 1);
	const freedom = several.reduce((sum, { respondents }) => sum + respondents - 1, 0);
	const spread = several.reduce((sum, stratum) => sum + residualMoments(stratum, linearized).spread, 0);
	return freedom > 0 ? spread / freedom / linearized.scale ** 2 : null;
}
