import type { Calibration, Sample } from "#app/estimate/calibration/calibration.ts";
import type { WeightedMoments } from "#app/estimate/domain.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { linearize, residualSum, type EstimateKind, type Linearized } from "#app/estimate/linearize.ts";

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
 * @throws {RangeError} for another number of answers, or when a stratum has one respondent of several.
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
 * @throws {RangeError} when a stratum has one respondent of several.
 */
export function unexplainedVariances(sample: Sample, calibration: Calibration, values: readonly number[]): number[] {
	const rest = calibration.unexplained(values);
	const strata = sample.samplingFractions.map(() => ({ n: 0, sum: 0, squares: 0 }));
	for (const [i, { stratum }] of sample.operations.entries()) {
		strata[stratum]!.n += 1;
		strata[stratum]!.sum += calibration.weights[i]! * rest[i]!;
	}
	// The means first, then squares about them: a difference of two large sums would lose the digits of small areas.
	for (const [i, { stratum }] of sample.operations.entries()) {
		const { n, sum } = strata[stratum]!;
		strata[stratum]!.squares += (calibration.weights[i]! * rest[i]! - sum / n) ** 2;
	}
	return strata.map(({ n, squares }, stratum) => {
		const open = 1 - sample.samplingFractions[stratum]!;
		if (n === 0 || open === 0) return 0;
		if (n === 1) throw new RangeError("a stratum with one respondent of several has no variance: join it before");
		return (open * n * squares) / (n - 1);
	});
}

/** What one operation of the domain adds to the error of a figure, unweighted. */
export function contribution(linearized: Linearized, { y, x }: { y: number; x: number }): number {
	return residualSum(linearized, { n: 1, sumY: y, sumX: x }) / linearized.scale;
}
