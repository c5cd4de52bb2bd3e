import {
	CalibrationError,
	requireSample,
	type Calibration,
	type Sample,
} from "#app/estimate/calibration/calibration.ts";
import { independentBasis, product, residualsOf, type Auxiliary } from "#app/estimate/calibration/regression.ts";

/**
 * Linear calibration to known totals, the generalized regression estimator: w* = w (1 + x'l), with l such that the new
 * weights meet every total. To keep counts of operations, give each stratum's count (values 1 and 0) as an auxiliary too.
 * Factors can fall below 0 where totals lie far from what the sample gives: look at the least before using them.
 * @param auxiliaries each with one value an operation and its total over the frame. One that the others determine is
 *   left out when its total agrees with theirs.
 * @throws {CalibrationError} `totals_contradict` when no weights can meet all totals; `group_without_respondents` when an
 *   auxiliary is 0 for every respondent and its total is not.
 * @throws {RangeError} when the sample cannot be, or an auxiliary has another length or a value that is not finite.
 * Source: Deville and Särndal, Calibration estimators in survey sampling (1992), from memory; formula 9 of the reference
 * set. Checked: R survey 4.1-1 `calibrate`, in tests/reference.
 */
export function calibrateLinear(sample: Sample, auxiliaries: readonly Auxiliary[]): Calibration {
	requireSample(sample);
	auxiliaries.forEach((auxiliary) => requireAuxiliary(auxiliary, sample.operations.length));
	const weights = sample.operations.map(({ weight }) => weight);
	const basis = independentBasis(auxiliaries, weights, requireConsistent);
	const factors = weights.map(() => 1);
	const ones = [...factors];
	for (const { values, total } of basis) {
		const missing = total - product(ones, values, weights);
		for (let i = 0; i < factors.length; i++) factors[i]! += missing * values[i]!;
	}
	return {
		weights: weights.map((weight, i) => weight * factors[i]!),
		factors,
		unexplained: (values) => residualsOf(values, basis, weights),
		sweeps: 0,
	};
}

function requireConsistent({ name, values, total }: Auxiliary, implied: number): void {
	if (Math.abs(total - implied) <= 1e-9 * Math.max(Math.abs(total), Math.abs(implied))) return;
	if (values.every((value) => value === 0)) {
		throw new CalibrationError(
			"group_without_respondents",
			`the total of ${name} is ${total}, but no respondent has any of it`,
		);
	}
	throw new CalibrationError(
		"totals_contradict",
		`the total of ${name} is ${total}, but the other totals make it ${implied}`,
	);
}

function requireAuxiliary({ name, values, total }: Auxiliary, operations: number): void {
	if (values.length !== operations) throw new RangeError(`${name} has ${values.length} values for ${operations}`);
	if (![...values, total].every(Number.isFinite)) throw new RangeError(`${name} has values that are not finite`);
}
