import type { Figure } from "#app/estimate/estimators.ts";
import { betaQuantile, normal975, tQuantile } from "#app/estimate/distributions.ts";

/** Two ends of a 95 percent interval, in the units of the estimate. */
export type Interval = { lower: number; upper: number };

/** Estimate give or take 1.96 standard errors. For many respondents; ends can leave the possible range. */
export function normalInterval({ value, standardError }: Figure): Interval {
	return { lower: value - normal975 * standardError, upper: value + normal975 * standardError };
}

/** Estimate give or take the t quantile's standard errors. @returns null with no degree of freedom. */
export function tInterval({ value, standardError }: Figure, df: number): Interval | null {
	if (df < 1) return null;
	const reach = tQuantile(0.975, df) * standardError;
	return { lower: value - reach, upper: value + reach };
}

/**
 * Interval of a proportion on the logit scale, which keeps both ends between 0 and 1.
 * @param df respondents of the domain less the strata that hold them.
 * @returns null where the proportion is 0 or 1, which has no logit, or with no degree of freedom.
 * @throws {RangeError} when the value is not a proportion.
 * Source: formula 6 of the reference set; R survey 4.1-1 `svyciprop(method="xlogit")`.
 */
export function logitInterval({ value, standardError }: Figure, df: number): Interval | null {
	requireProportion(value);
	if (value === 0 || value === 1 || df < 1) return null;
	const logit = Math.log(value / (1 - value));
	const reach = (tQuantile(0.975, df) * standardError) / (value * (1 - value));
	return { lower: expit(logit - reach), upper: expit(logit + reach) };
}

/**
 * Exact binomial interval of a proportion with the sample size that the design is worth (Korn and Graubard). It also
 * stands at 0 and 1, where the effective size cannot be had from the variance and the count of respondents is used.
 * @param df respondents of the domain less the strata that hold them. @param respondents of the domain.
 * @returns null with no degree of freedom.
 * @throws {RangeError} when the value is not a proportion.
 * Source: Korn and Graubard (1998), from memory; formula 6 of the reference set; R survey 4.1-1 `svyciprop(method="beta")`.
 */
export function exactInterval({ value, standardError }: Figure, df: number, respondents: number): Interval | null {
	requireProportion(value);
	if (df < 1 || respondents < 2) return null;
	const spread = value * (1 - value);
	const size = spread > 0 && standardError > 0 ? spread / standardError ** 2 : respondents;
	const effective = size * (tQuantile(0.975, respondents - 1) / tQuantile(0.975, df)) ** 2;
	const yes = effective * value;
	const no = effective * (1 - value);
	return {
		lower: value === 0 ? 0 : betaQuantile(0.025, yes, no + 1),
		upper: value === 1 ? 1 : betaQuantile(0.975, yes + 1, no),
	};
}

/**
 * Interval of a proportion as it is published: on the logit scale, and exact where there is no logit.
 * @returns null with no degree of freedom.
 */
export function proportionInterval(figure: Figure, df: number, respondents: number): Interval | null {
	return logitInterval(figure, df) ?? exactInterval(figure, df, respondents);
}

function expit(logit: number): number {
	return 1 / (1 + Math.exp(-logit));
}

function requireProportion(value: number): void {
	if (!(value >= 0 && value <= 1)) throw new RangeError(`${value} is not a proportion`);
}
