import type { DomainStratum } from "#app/estimate/domain.ts";
import { residualSum, type Linearized } from "#app/estimate/linearize.ts";

/**
 * What to do with a stratum that has one respondent of several, where a variance cannot be had from within:
 * `refuse` throws (strata are joined before); `certain` counts it as if it had no sampling error; `from_zero` takes its
 * squared value uncorrected for the mean; `as_others` gives it the average of the other strata.
 * Tallygrove's own figures always refuse. The others exist so that published designs can be recomputed.
 */
export type LoneRespondent = "refuse" | "certain" | "from_zero" | "as_others";

/**
 * Variance of the weighted total of e = (y - slope x - intercept) / scale over a domain, by strata, with finite population correction:
 * sum over strata of (1 - f) n/(n - 1) times the sum over ALL n respondents of (w e - mean of w e) squared, where
 * respondents outside the domain are zeros. Had from counts, sums and centred second moments alone.
 * A fully counted stratum (f = 1) adds nothing, also with one respondent.
 * @param residual turns y and x into e (`linearize`).
 * @returns variance in units of (y / scale) squared; never negative, never NaN.
 * @throws {RangeError} when a stratum has no weight or no respondents, fewer respondents than its domain, or one
 *   respondent of several under `refuse`; under `as_others` when there are no others.
 * Source: Särndal, Swensson and Wretman, Model Assisted Survey Sampling (1992), chapters 3 and 5, from memory. Checked
 * against R survey 4.1-1 (`svytotal`, `svymean`, `svyratio`) in tests/reference.
 */
export function linearizedVariance(
	strata: readonly DomainStratum[],
	residual: Omit<Linearized, "value">,
	lone: LoneRespondent = "refuse",
): number {
	let variance = 0;
	let loneStrata = 0;
	let domainStrata = 0;
	for (const stratum of strata) {
		requireStratum(stratum, lone);
		const { weight, samplingFraction, respondents, domain } = stratum;
		if (domain.n > 0) domainStrata += 1;
		if (samplingFraction === 1) continue; // everybody answered: no sampling error
		const { sum, spread } = residualMoments(stratum, residual);
		const factor = (weight / residual.scale) ** 2 * (1 - samplingFraction);
		if (respondents > 1) variance += factor * (respondents / (respondents - 1)) * spread;
		else if (lone === "from_zero") variance += factor * sum ** 2;
		else if (lone === "as_others" && domain.n > 0) loneStrata += 1;
	}
	if (loneStrata > 0 && loneStrata === domainStrata) {
		throw new RangeError("every stratum has one respondent: there are no others to take a variance from");
	}
	return loneStrata > 0 ? (variance * domainStrata) / (domainStrata - loneStrata) : variance;
}

/** Sum of the residuals in one stratum and their sum of squares about the mean over all its respondents, unscaled. */
export function residualMoments(
	{ respondents, domain }: Pick<DomainStratum, "respondents" | "domain">,
	residual: Pick<Linearized, "slope" | "intercept">,
): { sum: number; spread: number } {
	if (domain.n === 0) return { sum: 0, spread: 0 };
	const sum = residualSum(residual, domain);
	const slope = residual.slope.high;
	const size = domain.mYY + slope ** 2 * domain.mXX;
	const within = domain.mYY - 2 * slope * domain.mXY + slope ** 2 * domain.mXX;
	// y in step with x leaves rounding such as 1e-17 or -1e-17 of the terms, which is no spread.
	const inside = within > size * 1e-14 ? within : 0;
	return { sum, spread: withZeros(inside, [sum, sum], domain.n, respondents) };
}

/**
 * Sum of products about the means over n respondents of the domain, taken over all respondents of the stratum: the zeros
 * outside the domain pull both means towards 0, which adds the product of the sums times (1/n - 1/respondents).
 */
export function withZeros(inside: number, sums: [number, number], n: number, respondents: number): number {
	return inside + sums[0] * sums[1] * ((respondents - n) / (respondents * n));
}

function requireStratum(stratum: DomainStratum, lone: LoneRespondent): void {
	const { weight, samplingFraction, respondents, domain } = stratum;
	if (!(weight > 0 && Number.isFinite(weight)) || !(samplingFraction >= 0 && samplingFraction <= 1)) {
		throw new RangeError(`a stratum cannot have weight ${weight} and sampling fraction ${samplingFraction}`);
	}
	if (respondents < 1 || domain.n > respondents) {
		throw new RangeError(`a stratum cannot have ${respondents} respondents, ${domain.n} of them in the domain`);
	}
	if (lone === "refuse" && respondents === 1 && samplingFraction < 1) {
		throw new RangeError("a stratum with one respondent of several has no variance: join it before");
	}
}
