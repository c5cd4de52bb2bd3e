/** How far an estimate can be leant on, in one word. The words a reader sees are in the locale files. */
export type Steadiness = "steady" | "care" | "rough";

/**
 * Up to `steady` is steady, up to `care` is to be used with care: coefficients of variation as fractions, and for a day of the
 * year half the width of its 95 percent interval in days.
 */
export type SteadinessCutOffs = { steady: number; care: number; steadyDays: number; careDays: number };

/**
 * Used until a network sets its own. Common practice, no source: the published cut-offs of coefficients of variation differ
 * (15 to 17 percent for free use, 25 to 35 percent for use with caution), and these lie among them. For days there are none:
 * three days are near enough to plan a spray by, and a median known to no more than a week says early, usual or late.
 */
export const defaultCutOffs: SteadinessCutOffs = Object.freeze({ steady: 0.15, care: 0.3, steadyDays: 3, careDays: 7 });

/**
 * Puts an estimate's uncertainty into one word, by its unrounded coefficient of variation.
 *
 * Where the coefficient says nothing the rule is our own: no standard error is `rough`; a standard error of 0, or an
 * estimate of 0, is `care`, as answers that all agree show no spread without proving that the others agree too. Only
 * when everybody was asked and answered is it `steady`.
 * @param cv standard error over the size of the estimate, a fraction; null where either is missing or the estimate is 0.
 * @throws {RangeError} when the cut-offs are not 0 < steady <= care.
 */
export function steadiness(
	{ cv, standardError, everybody }: { cv: number | null; standardError: number | null; everybody: boolean },
	cutOffs: Pick<SteadinessCutOffs, "steady" | "care"> = defaultCutOffs,
): Steadiness {
	requireRising(cutOffs.steady, cutOffs.care);
	if (standardError === null) return "rough";
	if (everybody) return "steady";
	if (cv === null || standardError === 0) return "care";
	if (cv <= cutOffs.steady) return "steady";
	return cv <= cutOffs.care ? "care" : "rough";
}

/** With fewer answers each quartile is one grower's own day. */
const fewestDays = 5;

/**
 * The same for a median day of the year, by half the width of its interval: a coefficient of variation would measure it
 * from the first of January, so that the same doubt looked smaller in fall than in spring. A median of fewer than five
 * answers is `rough`. A width of 0 is `care`, as there, unless everybody answered.
 * @param halfWidth in days; null where there is no interval.
 * @throws {RangeError} when the cut-offs are not 0 < steadyDays <= careDays.
 */
export function daySteadiness(
	{ halfWidth, respondents, everybody }: { halfWidth: number | null; respondents: number; everybody: boolean },
	{ steadyDays, careDays }: Pick<SteadinessCutOffs, "steadyDays" | "careDays"> = defaultCutOffs,
): Steadiness {
	requireRising(steadyDays, careDays);
	if (halfWidth === null || respondents < fewestDays) return "rough";
	if (everybody) return "steady";
	if (halfWidth === 0) return "care";
	if (halfWidth <= steadyDays) return "steady";
	return halfWidth <= careDays ? "care" : "rough";
}

function requireRising(steady: number, care: number): void {
	if (!(steady > 0 && care >= steady)) {
		throw new RangeError(`steadiness cut-offs must rise from above 0, got ${steady} and ${care}`);
	}
}
