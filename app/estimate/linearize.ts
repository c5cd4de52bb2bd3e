import { preciseQuotient, preciseZero, sumOfProducts, type Precise } from "#app/lib/precise.ts";
import type { WeightedMoments } from "#app/estimate/domain.ts";

/**
 * What is estimated from a measure's y and x: the total of y; the mean of y an operation; the ratio of the totals of y
 * and x; or a proportion, a ratio that lies between 0 and 1 because y is a part of x (or y is 0 or 1 and x is 1).
 */
export type EstimateKind = "total" | "mean" | "ratio" | "proportion";

/**
 * An estimate, and what each operation of the domain contributes to its error: e = (y - slope x - intercept) / scale. By
 * Taylor linearization the estimate varies from sample to sample like the weighted total of e.
 */
export type Linearized = { value: number; slope: Precise; intercept: Precise; scale: number };

/**
 * Value and linearization of one kind of figure over a domain.
 * @returns null where there is nothing to divide by: nobody for a mean, no x for a ratio.
 * Source: Särndal, Swensson and Wretman, Model Assisted Survey Sampling (1992), chapter 5, from memory.
 */
export function linearize(kind: EstimateKind, strata: readonly WeightedMoments[]): Linearized | null {
	const y = sumOfProducts(strata.map(({ weight, domain }) => [weight, domain.sumY]));
	if (kind === "total") return { value: y.high, slope: preciseZero, intercept: preciseZero, scale: 1 };
	const base = sumOfProducts(strata.map(({ weight, domain }) => [weight, kind === "mean" ? domain.n : domain.sumX]));
	if (base.high === 0) return null;
	const quotient = preciseQuotient(y, base);
	const parts = { slope: preciseZero, intercept: preciseZero, [kind === "mean" ? "intercept" : "slope"]: quotient };
	return { value: quotient.high, ...parts, scale: base.high };
}

/** The sum of y - slope x - intercept over operations whose count and sums are given, without the scale. */
export function residualSum(
	{ slope, intercept }: Pick<Linearized, "slope" | "intercept">,
	{ n, sumY, sumX }: { n: number; sumY: number; sumX: number },
): number {
	return sumOfProducts([
		[sumY, 1],
		[slope.high, -sumX],
		[slope.low, -sumX],
		[intercept.high, -n],
		[intercept.low, -n],
	]).high;
}
