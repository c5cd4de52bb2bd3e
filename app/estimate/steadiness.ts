/** How far an estimate can be leant on, in one word. The words a reader sees are in the locale files. */
export type Steadiness = "steady" | "care" | "rough";

/** Coefficients of variation as fractions: up to `steady` is steady, up to `care` is to be used with care. */
export type SteadinessCutOffs = { steady: number; care: number };

/**
 * Used until a network sets its own. Common practice, no source: the published cut-offs differ (15 to 17 percent for
 * free use, 25 to 35 percent for use with caution), and these lie among them.
 */
export const defaultCutOffs: SteadinessCutOffs = Object.freeze({ steady: 0.15, care: 0.3 });

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
	cutOffs: SteadinessCutOffs = defaultCutOffs,
): Steadiness {
	if (!(cutOffs.steady > 0 && cutOffs.care >= cutOffs.steady)) {
		throw new RangeError(`steadiness cut-offs must rise from above 0, got ${cutOffs.steady} and ${cutOffs.care}`);
	}
	if (standardError === null) return "rough";
	if (everybody) return "steady";
	if (cv === null || standardError === 0) return "care";
	if (cv <= cutOffs.steady) return "steady";
	return cv <= cutOffs.care ? "care" : "rough";
}
