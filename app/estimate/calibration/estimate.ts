import { momentsOf } from "#app/lib/moments.ts";
import { preciseZero } from "#app/lib/precise.ts";
import type { Calibration, Sample } from "#app/estimate/calibration/calibration.ts";
import type { WeightedMoments } from "#app/estimate/domain.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { linearize, residualSum, type EstimateKind, type Linearized } from "#app/estimate/linearize.ts";
import { linearizedVariance } from "#app/estimate/variance.ts";

/** The answers of one operation, in the order of the sample; null where it lies outside the domain. */
export type DomainAnswer = { y: number; x: number } | null;

/** The answers with the weights of a calibration, as the estimators take them: each operation by itself. */
export function weightedAnswers(calibration: Calibration, answers: readonly DomainAnswer[]): WeightedMoments[] {
	return answers.flatMap((answer, i) =>
		answer ? [{ weight: calibration.weights[i]!, domain: { ...single, sumY: answer.y, sumX: answer.x } }] : [],
	);
}

const single = { n: 1, sumY: 0, sumX: 0, mYY: 0, mXX: 0, mXY: 0 };

/**
 * A total, mean, ratio or proportion of a domain with calibrated weights. Its variance is that of the weighted total of
 * what the calibration does not explain of the linearized values: those are 0 outside the domain, their residuals are not.
 * @param answers one entry an operation of the sample, null outside the domain.
 * @returns in units of y or y per unit of x; null where there is nothing to divide by.
 * @throws {RangeError} for another number of answers, or as `linearizedVariance`.
 * Source: Deville and Särndal (1992), from memory; formulas 8 to 10 of the reference set. Checked: R survey 4.1-1.
 */
export function calibratedEstimate(
	kind: EstimateKind,
	sample: Sample,
	calibration: Calibration,
	answers: readonly DomainAnswer[],
): Figure | null {
	if (answers.length !== sample.operations.length) {
		throw new RangeError(`${answers.length} answers for ${sample.operations.length} operations`);
	}
	const linearized = linearize(kind, weightedAnswers(calibration, answers));
	if (!linearized) return null;
	const values = answers.map((answer) => (answer ? contribution(linearized, answer) : 0));
	const variance = unexplainedVariances(sample, calibration, values).reduce((sum, one) => sum + one, 0);
	return { value: linearized.value, standardError: Math.sqrt(variance) };
}

/**
 * What each stratum adds to the variance of the weighted total of values, one an operation, after calibration.
 * @returns in the order of the sample's strata, 0 for those without respondents.
 * @throws {RangeError} as `linearizedVariance`.
 */
export function unexplainedVariances(sample: Sample, calibration: Calibration, values: readonly number[]): number[] {
	const rest = calibration.unexplained(values);
	const weighted = sample.samplingFractions.map((): { y: number; x: number }[] => []);
	for (const [i, { stratum }] of sample.operations.entries())
		weighted[stratum]!.push({ y: calibration.weights[i]! * rest[i]!, x: 0 });
	return weighted.map((own, stratum) => {
		if (own.length === 0) return 0;
		const samplingFraction = sample.samplingFractions[stratum]!;
		return linearizedVariance([{ weight: 1, samplingFraction, respondents: own.length, domain: momentsOf(own) }], asIs);
	});
}

const asIs = { slope: preciseZero, intercept: preciseZero, scale: 1 };

/** What one operation of the domain adds to the error of a figure, unweighted. */
export function contribution(linearized: Linearized, { y, x }: { y: number; x: number }): number {
	return residualSum(linearized, { n: 1, sumY: y, sumX: x }) / linearized.scale;
}
