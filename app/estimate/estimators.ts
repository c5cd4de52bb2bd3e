import type { DomainStratum } from "#app/estimate/domain.ts";
import { linearize, type EstimateKind } from "#app/estimate/linearize.ts";
import { linearizedVariance, type LoneRespondent } from "#app/estimate/variance.ts";

/** An estimate and its standard error, both in the units of the quantity estimated. */
export type Figure = { value: number; standardError: number };

/**
 * Estimators of a domain in a stratified sample. All take the strata of the design that hold somebody of the domain; others may
 * be given and add nothing. They return null where there is nothing to estimate. A domain with one respondent gets a
 * standard error of 0 from `meanEstimate` and `ratioEstimate`, since one answer has no spread about itself: that is not
 * precision, and `estimateCell` does not pass it on.
 * Checked: R survey 4.1-1 `svytotal`, `svymean`, `svyratio`, `svyby`, in tests/reference.
 */

/** Total of y over the domain, in units of y: 0 with standard error 0 where nobody of the domain answered. */
export function totalEstimate(strata: readonly DomainStratum[], lone?: LoneRespondent): Figure {
	return estimateOf("total", strata, lone)!;
}

/** Mean of y an operation of the domain, in units of y. @returns null where nobody of the domain answered. */
export function meanEstimate(strata: readonly DomainStratum[], lone?: LoneRespondent): Figure | null {
	return estimateOf("mean", strata, lone);
}

/**
 * Ratio of two totals, R = Y / X, in units of y per unit of x: pounds lost per pound of a normal crop, say.
 * @returns null where X is 0: there is then nothing to divide by.
 */
export function ratioEstimate(strata: readonly DomainStratum[], lone?: LoneRespondent): Figure | null {
	return estimateOf("ratio", strata, lone);
}

/** Any of the above by its kind; a proportion is a ratio. */
export function estimateOf(kind: EstimateKind, strata: readonly DomainStratum[], lone?: LoneRespondent): Figure | null {
	const linearized = linearize(kind, strata);
	return linearized && figure(linearized.value, linearizedVariance(strata, linearized, lone));
}

/**
 * Total of y by the ratio to an x whose total over the frame is known, such as bearing trees: X R, in units of y.
 * @param frameTotalX total of x over all operations of the domain on the frame.
 * @returns null where no respondent has any x.
 */
export function ratioTotalEstimate(
	strata: readonly DomainStratum[],
	frameTotalX: number,
	lone?: LoneRespondent,
): Figure | null {
	const ratio = ratioEstimate(strata, lone);
	if (!ratio) return null;
	return { value: frameTotalX * ratio.value, standardError: Math.abs(frameTotalX) * ratio.standardError };
}

/**
 * Total of y by a separate ratio in each stratum: the sum of X_h R_h. It suits strata whose ratios differ, and needs
 * enough respondents in each, as every ratio has its own small bias.
 * @param strata each with the total of x over its frame.
 * @returns null where a stratum with some x on the frame has none among its respondents.
 */
export function separateRatioTotalEstimate(
	strata: readonly (DomainStratum & { frameTotalX: number })[],
	lone?: LoneRespondent,
): Figure | null {
	let value = 0;
	let variance = 0;
	for (const stratum of strata) {
		if (stratum.frameTotalX === 0) continue;
		const part = ratioTotalEstimate([stratum], stratum.frameTotalX, lone);
		if (!part) return null;
		value += part.value;
		variance += part.standardError ** 2;
	}
	return figure(value, variance);
}

function figure(value: number, variance: number): Figure {
	if (!Number.isFinite(value) || !Number.isFinite(variance)) {
		throw new RangeError("the sums are too large to be estimated from");
	}
	return { value, standardError: Math.sqrt(variance) };
}
