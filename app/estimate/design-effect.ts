import type { WeightedMoments } from "#app/estimate/domain.ts";
import { linearize, residualSum } from "#app/estimate/linearize.ts";

/**
 * How many times the variance of a mean is that of a simple random sample of as many respondents. Below 1 the design
 * helped; its inverse times the respondents is the effective sample size.
 * @param variance of the mean of y, as estimated.
 * @param parts the domain's sums with their weights: by stratum, or operation by operation where weights differ.
 * @param drawn `once` compares with a sample in which nobody is drawn twice, `again` with one that puts back.
 * @returns null with fewer than two respondents, or where the simple sample would have no variance: all alike, or all of
 *   the frame.
 * Source: Kish, Survey Sampling (1965), from memory. Checked: R survey 4.1-1 `svymean(deff=)`.
 */
export function designEffect(
	variance: number,
	parts: readonly WeightedMoments[],
	drawn: "once" | "again" = "once",
): number | null {
	const n = parts.reduce((sum, { domain }) => sum + domain.n, 0);
	const linearized = linearize("mean", parts);
	if (!linearized || n < 2) return null;
	const count = linearized.scale;
	let squares = 0;
	for (const { weight, domain } of parts) {
		if (domain.n > 0) squares += weight * (domain.mYY + residualSum(linearized, domain) ** 2 / domain.n);
	}
	const open = drawn === "once" ? 1 - n / count : 1;
	const simple = ((squares / count) * open) / (n - 1);
	return simple > 0 ? variance / simple : null;
}
