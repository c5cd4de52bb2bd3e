// Methods that the reference files hold beside ours, computed from our estimates and standard errors. None is shipped.
import { tQuantile } from "#app/estimate/distributions.ts";
import { ratioEstimate, type Figure } from "#app/estimate/estimators.ts";
import type { Interval } from "#app/estimate/interval.ts";
import { seenFrom, type Design, type Domain, type Quantity } from "#tests/reference/estimation/design.ts";

/** Interval of a proportion on the scale of the arcsine of its square root, where its variance hardly depends on it. */
export function arcsineInterval({ value, standardError }: Figure, df: number): Interval | null {
	if (value === 0 || value === 1 || df < 1) return null;
	const middle = Math.asin(Math.sqrt(value));
	const reach = (tQuantile(0.975, df) * standardError) / (2 * Math.sqrt(value * (1 - value)));
	return { lower: Math.sin(middle - reach) ** 2, upper: Math.sin(middle + reach) ** 2 };
}

/** The package reads its ends off a curve through some points of the likelihood, 5e-6 or less from where they lie. */
export const likelihoodTolerance = 1e-5;

/** Interval of a proportion by the likelihood, scaled to what the design is worth: where it has fallen by t² / 2. */
export function likelihoodInterval({ value: p, standardError }: Figure, df: number, n: number): Interval | null {
	if (p === 0 || p === 1 || df < 1) return null;
	const limit = ((tQuantile(0.975, df) * standardError) ** 2 / (2 * p * (1 - p))) * (n / (n - 1));
	const fallen = (at: number) => p * Math.log(p / at) + (1 - p) * Math.log((1 - p) / (1 - at)) > limit;
	return { lower: halve(0, p, (at) => !fallen(at)), upper: halve(p, 1, fallen) };
}

/** Where a condition that fails at `low` and holds at `high` begins to hold. */
function halve(low: number, high: number, holds: (at: number) => boolean): number {
	for (let i = 0; i < 100; i++) {
		const middle = (low + high) / 2;
		if (holds(middle)) high = middle;
		else low = middle;
	}
	return high;
}

/**
 * Quantile interval by the score: the values at which "this is the quantile" stops being refused. The package reads its
 * plain share of respondents at or below back as a weighted quantile, and which side of a step it stops on is a matter of
 * its root finder's rounding: each end has two candidates.
 */
export function scoreEnds(
	design: Design,
	{ domain, y, p, df }: { domain: Domain; y: Quantity; p: number; df: number },
): { lower: number[]; upper: number[] } {
	const rows = design.strata.flatMap((stratum) =>
		stratum.rows.filter(domain).map((row) => ({ value: y(row), weight: stratum.weight })),
	);
	const sorted = rows.toSorted((a, b) => a.value - b.value);
	const values = [...new Set(sorted.map(({ value }) => value))];
	const score = (bound: number) => {
		const above = ratioEstimate(seenFrom(design, domain, (row) => (y(row) > bound ? 1 : 0)))!;
		return (above.value - (1 - p)) / above.standardError;
	};
	const total = sorted.reduce((sum, { weight }) => sum + weight, 0);
	const readBack = (bound: number) => {
		const target = (sorted.filter(({ value }) => value <= bound).length / sorted.length) * total * (1 - 1e-12);
		let sum = 0;
		return sorted.find(({ weight }) => (sum += weight) >= target)!.value;
	};
	const candidates = (limit: number) => {
		const at = values.findIndex((value) => score(value) < limit);
		return [values[at - 1]!, values[at]!].map(readBack);
	};
	const t = tQuantile(0.975, df);
	return { lower: candidates(t), upper: candidates(-t) };
}
