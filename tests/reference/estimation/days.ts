import { domainDegreesOfFreedom } from "#app/estimate/domain.ts";
import { tQuantile } from "#app/estimate/distributions.ts";
import { tInterval } from "#app/estimate/interval.ts";
import { quantileEstimate, type HistogramStratum, type QuantileRule } from "#app/estimate/quantile.ts";
import {
	numberIn,
	readCsv,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";
import { groupBy } from "#app/lib/group-by.ts";

const rules: Record<string, QuantileRule> = { math: "lower", school: "midpoint", hf2: "midpoint" };

/**
 * Quartiles of day of year by domain, from the histograms. Columns `pkg_*` hold what the package gives, which differs on
 * some small domains.
 */
export async function checkDays(folder: string, file: string): Promise<Checked> {
	const strata = await readCsv(folder, "days_strata.csv");
	const histograms = groupBy(await readCsv(folder, "days_histograms.csv"), domainOf);
	const rows = await readCsv(folder, file);
	const comparisons = rows.flatMap((row) => compareRow(row, histogram(strata, histograms.get(domainOf(row)) ?? [])));
	return { comparisons, notCovered: 0 };
}

function domainOf(row: Row): string {
	return `${row.domain_type} ${row.domain}`;
}

function histogram(strata: Row[], counts: Row[]): HistogramStratum[] {
	return strata.map((row) => {
		const respondents = requiredNumber(row, "n");
		const frameSize = requiredNumber(row, "N");
		const own = counts.filter((count) => count.stratum === row.stratum);
		return {
			weight: frameSize / respondents,
			samplingFraction: respondents / frameSize,
			respondents,
			counts: own.map((count) => ({ value: requiredNumber(count, "day"), n: requiredNumber(count, "n") })),
		};
	});
}

function compareRow(row: Row, strata: HistogramStratum[]): Comparison[] {
	const p = requiredNumber(row, "p");
	const figure = quantileEstimate(strata, p, { rule: rules[row.qrule ?? ""] })!;
	const counted = strata.map(({ counts, ...stratum }) => {
		const n = counts.reduce((sum, count) => sum + count.n, 0);
		return { ...stratum, domain: { n, sumY: 0, sumX: n, mYY: 0, mXX: 0, mXY: 0 } };
	});
	const df = domainDegreesOfFreedom(counted);
	const share = tInterval(figure.share, df);
	const [lower, upper] = [
		asInPackage(strata, share?.lower ?? 0, figure.lower),
		asInPackage(strata, share?.upper ?? 0, figure.upper),
	];
	const values: Record<string, number | null> = {
		n: figure.respondents,
		df,
		quantile: figure.value,
		lower: figure.lower,
		upper: figure.upper,
		se: figure.standardError,
		p_hat: figure.share.value,
		se_p_hat: figure.share.standardError,
		p_lower: share?.lower ?? null,
		p_upper: share?.upper ?? null,
		pkg_quantile: asInPackage(strata, p, figure.value),
		pkg_lower: lower,
		pkg_upper: upper,
		pkg_se: lower === null || upper === null ? null : (upper - lower) / (2 * tQuantile(0.975, df)),
	};
	return Object.entries(values).map(([name, actual]) => ({
		at: `${domainOf(row)} ${row.qrule} p=${row.p} ${name}`,
		expected: numberIn(row, name),
		actual,
		scale: name === "se_p_hat" ? 1 : undefined,
	}));
}

/**
 * The package's value at a share: where the share ends within the weight of the first operation it gives the second
 * operation's day, not the first's.
 */
function asInPackage(strata: HistogramStratum[], share: number, ours: number | null): number | null {
	const operations = strata
		.flatMap(({ weight, counts }) =>
			counts.flatMap(({ value, n }) => Array.from({ length: n }, () => ({ value, weight }))),
		)
		.toSorted((a, b) => a.value - b.value);
	const total = operations.reduce((sum, { weight }) => sum + weight, 0);
	const withinFirst = share * total < operations[0]!.weight * (1 - 1e-12);
	return ours !== null && withinFirst ? operations[1]!.value : ours;
}
