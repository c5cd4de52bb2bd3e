import { domainTotals, type DomainStratum } from "#app/estimate/domain.ts";
import { meanEstimate, ratioEstimate, totalEstimate, type Figure } from "#app/estimate/estimators.ts";
import { exactInterval, logitInterval, normalInterval, tInterval, type Interval } from "#app/estimate/interval.ts";
import { quantileEstimate, type QuantileRule } from "#app/estimate/quantile.ts";
import { isObject, type Comparison, type Json } from "#tests/reference/checking.ts";
import {
	column,
	histogramOf,
	seenFrom,
	type Design,
	type Domain,
	type Quantity,
} from "#tests/reference/estimation/design.ts";

type Node = { [key: string]: Json };

/** Splits "numerator_denominator" where both halves are columns, since names can hold the joining sign too. */
export function splitPair(pair: string, columns: Set<string>): [string, string] | undefined {
	for (let i = pair.indexOf("_"); i >= 0; i = pair.indexOf("_", i + 1)) {
		const halves: [string, string] = [pair.slice(0, i), pair.slice(i + 1)];
		if (columns.has(halves[0]) && columns.has(halves[1])) return halves;
	}
	return undefined;
}

/** The figure that a key such as `mean_a`, `total_a` or `ratio_a_b` names; undefined for any other key. */
export function namedFigure(design: Design, domain: Domain, key: string): Figure | null | undefined {
	const [, kind, rest = ""] = /^(mean|total|ratio)_(.+)$/.exec(key) ?? [];
	if (kind === "ratio") {
		const pair = splitPair(rest, design.columns);
		return pair && ratioEstimate(seenFrom(design, domain, column(pair[0]), column(pair[1])));
	}
	if (!kind || !design.columns.has(rest)) return undefined;
	const strata = seenFrom(design, domain, column(rest));
	return kind === "mean" ? meanEstimate(strata) : totalEstimate(strata);
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

/**
 * Intervals of a proportion: `xlogit` is the logit interval by formula, `logit` the same from a fitted model, which
 * stops early (1e-7); `beta` is the exact one with effective size, `mean` the plain t interval.
 */
export function compareProportion(at: string, node: Node, strata: DomainStratum[], df: number): Comparison[] {
	const figure = ratioEstimate(strata);
	if (!figure) return [{ at, expected: "a proportion", actual: null }];
	const { respondents } = domainTotals(strata);
	const intervals: Record<string, Interval | null> = {
		logit: logitInterval(figure, df),
		xlogit: logitInterval(figure, df),
		beta: exactInterval(figure, respondents, df),
		mean: tInterval(figure, df),
	};
	return Object.entries(intervals).flatMap(([method, interval]) => {
		const expected = node[method];
		if (!isObject(expected)) return [];
		const path = `${at}.${method}`;
		const ends = compareInterval(path, expected, interval, method === "logit" ? 1e-7 : undefined);
		const comparisons = ends.concat({ at: `${path}.estimate`, expected: expected.estimate, actual: figure.value });
		if ("se" in expected) comparisons.push({ at: `${path}.se`, expected: expected.se, actual: figure.standardError });
		if ("df" in expected) comparisons.push({ at: `${path}.df`, expected: expected.df, actual: df });
		if ("n" in expected) comparisons.push({ at: `${path}.n`, expected: expected.n, actual: respondents });
		return comparisons;
	});
}

/** A block of parallel lists: p, quantile, lower, upper, se. */
export function compareQuantiles(
	at: string,
	node: Node,
	design: Design,
	{ domain, y, rule, df }: { domain: Domain; y: Quantity; rule: QuantileRule; df?: number },
): Comparison[] {
	const strata = histogramOf(design, domain, y);
	const list = (name: string) => (Array.isArray(node[name]) ? (node[name] as Json[]) : []);
	return list("p").flatMap((p, i) => {
		const figure = quantileEstimate(strata, Number(p), { rule, df });
		return [
			{ at: `${at}.quantile[${i}]`, expected: list("quantile")[i], actual: figure?.value ?? null },
			{ at: `${at}.lower[${i}]`, expected: list("lower")[i], actual: figure?.lower ?? null },
			{ at: `${at}.upper[${i}]`, expected: list("upper")[i], actual: figure?.upper ?? null },
			{ at: `${at}.se[${i}]`, expected: list("se")[i], actual: figure?.standardError ?? null },
		];
	});
}
