import { tQuantile } from "#app/estimate/distributions.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { exactInterval, logitInterval, normalInterval, tInterval, type Interval } from "#app/estimate/interval.ts";
import { quantileEstimate, type QuantileRule, type ShareInterval } from "#app/estimate/quantile.ts";
import { isObject, type Comparison, type Json } from "#tests/reference/checking.ts";
import {
	column,
	histogramOf,
	one,
	type Design,
	type Domain,
	type Quantity,
} from "#tests/reference/estimation/design.ts";
import type { Estimating } from "#tests/reference/estimation/estimating.ts";
import {
	arcsineInterval,
	likelihoodInterval,
	likelihoodTolerance,
	scoreEnds,
} from "#tests/reference/estimation/other-methods.ts";

export type Node = { [key: string]: Json };

/** Splits "numerator_denominator" where both halves are columns, since names can hold the joining sign too. */
export function splitPair(pair: string, columns: Set<string>): [string, string] | undefined {
	for (let i = pair.indexOf("_"); i >= 0; i = pair.indexOf("_", i + 1)) {
		const halves: [string, string] = [pair.slice(0, i), pair.slice(i + 1)];
		if (columns.has(halves[0]) && columns.has(halves[1])) return halves;
	}
	return undefined;
}

/** The figure that a key such as `mean_a`, `total_a` or `ratio_a_b` names; undefined for any other key. */
export function namedFigure(estimating: Estimating, domain: Domain, key: string): Figure | null | undefined {
	const [, kind, rest = ""] = /^(mean|total|ratio)_(.+)$/.exec(key) ?? [];
	const { columns } = estimating.design;
	if (kind === "ratio") {
		const pair = splitPair(rest, columns);
		return pair && estimating.figure("ratio", domain, column(pair[0]), column(pair[1]));
	}
	if (!kind || !columns.has(rest)) return undefined;
	return estimating.figure(kind === "mean" ? "mean" : "total", domain, column(rest));
}

/** Estimate, standard error, CV and intervals of one block, as far as the block holds them. */
export function compareFigure(at: string, node: Node, figure: Figure | null, df: number): Comparison[] {
	const comparisons: Comparison[] = [
		{ at: `${at}.estimate`, expected: node.estimate, actual: figure?.value ?? null },
		{ at: `${at}.se`, expected: node.se, actual: figure?.standardError ?? null, scale: figure?.value },
	];
	if (!figure) return comparisons;
	if ("cv" in node) {
		comparisons.push({
			at: `${at}.cv`,
			expected: node.cv,
			actual: figure.standardError / Math.abs(figure.value),
			scale: 1,
		});
	}
	comparisons.push(...compareInterval(`${at}.ci95_normal`, node.ci95_normal, normalInterval(figure)));
	const t = node.ci95_t;
	if (isObject(t)) comparisons.push({ at: `${at}.ci95_t.df`, expected: t.df, actual: df });
	return [...comparisons, ...compareInterval(`${at}.ci95_t`, t, tInterval(figure, df))];
}

function compareInterval(
	at: string,
	node: Json | undefined,
	interval: Interval | null,
	tolerance?: number,
): Comparison[] {
	if (!isObject(node)) return [];
	return (["lower", "upper"] as const).map((end) => ({
		at: `${at}.${end}`,
		expected: node[end],
		actual: interval?.[end] ?? null,
		tolerance,
		// An end can fall near 0 by chance; it is then judged against the width.
		scale: interval ? interval.upper - interval.lower : undefined,
	}));
}

/** The package fits `logit` by iteration, which stops early; `likelihood` has its ends read off a curve. */
const tolerances: Record<string, number> = { logit: 1e-7, likelihood: likelihoodTolerance };

/**
 * Intervals of a proportion: `xlogit` is the logit interval by formula, `logit` the same from a fitted model; `beta` is
 * the exact one with effective size, `mean` the plain t interval. The others are not ours.
 */
export function compareProportion(
	at: string,
	node: Node,
	figure: Figure | null,
	{ df, respondents }: { df: number; respondents: number },
): Comparison[] {
	if (!figure) return [{ at, expected: "a proportion", actual: null }];
	const intervals: Record<string, Interval | null> = {
		logit: logitInterval(figure, df),
		xlogit: logitInterval(figure, df),
		beta: exactInterval(figure, df, respondents),
		mean: tInterval(figure, df),
		asin: arcsineInterval(figure, df),
		likelihood: likelihoodInterval(figure, df, respondents),
	};
	return Object.entries(intervals).flatMap(([method, interval]) => {
		const expected = node[method];
		if (!isObject(expected)) return [];
		const path = `${at}.${method}`;
		const ends = compareInterval(path, expected, interval, tolerances[method]);
		const comparisons = ends.concat({ at: `${path}.estimate`, expected: expected.estimate, actual: figure.value });
		if ("se" in expected) comparisons.push({ at: `${path}.se`, expected: expected.se, actual: figure.standardError });
		if ("df" in expected) comparisons.push({ at: `${path}.df`, expected: expected.df, actual: df });
		if ("n" in expected) comparisons.push({ at: `${path}.n`, expected: expected.n, actual: respondents });
		return comparisons;
	});
}

type QuantileQuestion = {
	domain: Domain;
	y: Quantity;
	rule: QuantileRule;
	df?: number;
	interval?: ShareInterval;
};

/** A block of parallel lists: p, quantile, lower, upper, se. */
export function compareQuantiles(at: string, node: Node, design: Design, question: QuantileQuestion): Comparison[] {
	const { domain, y, ...options } = question;
	const strata = histogramOf(design, domain, y);
	const list = (name: string) => (Array.isArray(node[name]) ? (node[name] as Json[]) : []);
	return list("p").flatMap((p, i) => {
		const figure = quantileEstimate(strata, Number(p), options);
		return [
			{ at: `${at}.quantile[${i}]`, expected: list("quantile")[i], actual: figure?.value ?? null },
			{ at: `${at}.lower[${i}]`, expected: list("lower")[i], actual: figure?.lower ?? null },
			{ at: `${at}.upper[${i}]`, expected: list("upper")[i], actual: figure?.upper ?? null },
			{ at: `${at}.se[${i}]`, expected: list("se")[i], actual: figure?.standardError ?? null },
		];
	});
}

/** As `compareQuantiles`, for ends by the score, each of which may be one of two. */
export function compareScoreQuantiles(
	at: string,
	node: Node,
	design: Design,
	{ domain, y, df }: { domain: Domain; y: Quantity; df: number },
): Comparison[] {
	const list = (name: string) => (Array.isArray(node[name]) ? node[name].map(Number) : []);
	const t = tQuantile(0.975, df);
	return list("p").flatMap((p, i) => {
		const ends = scoreEnds(design, { domain, y, p, df });
		const [lower, upper] = (["lower", "upper"] as const).map(
			(end) => ends[end].find((value) => value === list(end)[i]) ?? ends[end][0]!,
		);
		const value = quantileEstimate(histogramOf(design, domain, y), p)?.value ?? null;
		return [
			{ at: `${at}.quantile[${i}]`, expected: list("quantile")[i], actual: value },
			{ at: `${at}.lower[${i}]`, expected: list("lower")[i], actual: lower },
			{ at: `${at}.upper[${i}]`, expected: list("upper")[i], actual: upper },
			{ at: `${at}.se[${i}]`, expected: list("se")[i], actual: (upper! - lower!) / (2 * t) },
		];
	});
}

/** How many answered, in the whole design or in a domain. */
export function respondentsIn({ parts }: Estimating, domain: Domain): number {
	return parts(domain, one).reduce((sum, part) => sum + part.domain.n, 0);
}
