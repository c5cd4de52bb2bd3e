import { domainDegreesOfFreedom } from "#app/estimate/domain.ts";
import { quantileEstimate, type HistogramStratum, type QuantileRule } from "#app/estimate/quantile.ts";
import {
	numberIn,
	readCsv,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";
import { groupBy } from "#tests/reference/estimation/design.ts";

const rules: Record<string, QuantileRule> = { math: "lower", school: "midpoint", hf2: "midpoint" };

/**
 * Quartiles of day of year by domain, from the histograms. Columns `pkg_*` show a quirk of the package on small
 * domains and are not ours to reproduce.
 */
export async function checkDays(folder: string, file: string): Promise<Checked> {
	const strata = await readCsv(folder, "days_strata.csv");
	const histograms = groupBy(await readCsv(folder, "days_histograms.csv"), domainOf);
	const checked: Checked = { comparisons: [], notCovered: 0 };
	for (const row of await readCsv(folder, file)) {
		const rule = rules[row.qrule ?? ""];
		if (rule)
			checked.comparisons.push(...compareRow(row, histogram(strata, histograms.get(domainOf(row)) ?? []), rule));
		else checked.notCovered += 1;
		checked.notCovered += Object.keys(row).filter((name) => name.startsWith("pkg_")).length;
	}
	return checked;
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

function compareRow(row: Row, strata: HistogramStratum[], rule: QuantileRule): Comparison[] {
	const figure = quantileEstimate(strata, requiredNumber(row, "p"), { rule });
	const counted = strata.map(({ counts, ...stratum }) => {
		const n = counts.reduce((sum, count) => sum + count.n, 0);
		return { ...stratum, domain: { n, sumY: 0, sumX: n, mYY: 0, mXX: 0, mXY: 0 } };
	});
	const values: Record<string, number | null | undefined> = {
		n: figure?.respondents,
		df: domainDegreesOfFreedom(counted),
		quantile: figure?.value,
		lower: figure?.lower,
		upper: figure?.upper,
		se: figure?.standardError,
		p_hat: figure?.share.value,
		se_p_hat: figure?.share.standardError,
	};
	const at = `${domainOf(row)} ${row.qrule} p=${row.p}`;
	return Object.entries(values).map(([name, actual]) => ({
		at: `${at} ${name}`,
		expected: numberIn(row, name),
		actual: actual ?? null,
		scale: name === "se_p_hat" ? 1 : undefined,
	}));
}
