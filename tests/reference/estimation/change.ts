import { groupBy } from "#app/lib/group-by.ts";
import { momentsOf } from "#app/lib/moments.ts";
import { pairedMomentsOf, type PairedAnswers } from "#app/lib/paired-moments.ts";
import { changeEstimate, type TwoSeasonStratum } from "#app/estimate/change.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";
import {
	numberIn,
	readCsv,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";
import { type Domain } from "#tests/reference/estimation/design.ts";

/**
 * Change of totals and ratios between two seasons by domain, from sums by stratum alone. `b_fpc` is what ships; `b_nofpc`
 * leaves out the finite population correction; `a_stacked_nofpc` treats which season was answered as chance, too.
 */
export async function checkChange(folder: string, file: string): Promise<Checked> {
	const responses = groupBy(await readCsv(folder, "change_responses.csv"), (row) => row.stratum ?? "");
	const frame = await readCsv(folder, "change_strata.csv");
	const comparisons: Comparison[] = [];
	for (const row of await readCsv(folder, file)) {
		const inside: Domain = (operation) => row.domain_type === "all" || operation[row.domain_type ?? ""] === row.domain;
		const seen = frame.map((stratum) => {
			const rows = responses.get(stratum.stratum ?? "") ?? [];
			return { rows, sums: seenIn(stratum, rows, inside) };
		});
		const strata = seen.map(({ rows, sums }) => {
			if (row.variant === "a_stacked_nofpc") return stacked(withoutCorrection(sums), rows, inside);
			return row.variant === "b_fpc" ? sums : withoutCorrection(sums);
		});
		const bothSeasons = seen.reduce((sum, { sums }) => sum + sums.both.domain.n, 0);
		comparisons.push(...compareRow(row, strata, bothSeasons));
	}
	return { comparisons, notCovered: 0 };
}

const answered = (season: 1 | 2) => (row: Row) => row[`r${season}`] === "1";
const answeredBoth = (row: Row) => answered(1)(row) && answered(2)(row);

type Both = TwoSeasonStratum & { before: DomainStratum; now: DomainStratum };

function seenIn(stratum: Row, rows: Row[], inside: Domain): Both {
	const both = rows.filter(answeredBoth);
	return {
		before: seasonIn(stratum, rows, inside, 1),
		now: seasonIn(stratum, rows, inside, 2),
		both: {
			frameSize: requiredNumber(stratum, "Nc"),
			respondents: both.length,
			domain: pairedMomentsOf(both.filter(inside).map(pairOf)),
		},
	};
}

function seasonIn(stratum: Row, rows: Row[], inside: Domain, season: 1 | 2): DomainStratum {
	const all = rows.filter(answered(season));
	const frameSize = requiredNumber(stratum, `N${season}`);
	const answers = all
		.filter(inside)
		.map((row) => ({ y: requiredNumber(row, `y${season}`), x: requiredNumber(row, `x${season}`) }));
	return {
		weight: frameSize / all.length,
		samplingFraction: all.length / frameSize,
		respondents: all.length,
		domain: momentsOf(answers),
	};
}

/** A season that was not answered is a zero in both. */
function pairOf(row: Row): PairedAnswers {
	const [first, second] = [answered(1)(row) ? 1 : 0, answered(2)(row) ? 1 : 0];
	return {
		yBefore: first * (numberIn(row, "y1") ?? 0),
		xBefore: first * (numberIn(row, "x1") ?? 0),
		yNow: second * (numberIn(row, "y2") ?? 0),
		xNow: second * (numberIn(row, "x2") ?? 0),
	};
}

function withoutCorrection({ before, now, both }: Both): Both {
	return {
		before: { ...before, samplingFraction: 0 },
		now: { ...now, samplingFraction: 0 },
		both: { ...both, frameSize: 0 },
	};
}

/** One sample of all operations that answered at least once, each with zeros for a season that it missed. */
function stacked({ before, now }: Both, rows: Row[], inside: Domain): Both {
	const respondents = rows.length;
	return {
		before: { ...before, respondents },
		now: { ...now, respondents },
		both: { frameSize: 0, respondents, domain: pairedMomentsOf(rows.filter(inside).map(pairOf)) },
	};
}

function compareRow(row: Row, strata: Both[], bothSeasons: number): Comparison[] {
	const [total, ratio] = [changeEstimate("total", strata), changeEstimate("ratio", strata)];
	const count = (pick: (stratum: Both) => number) => strata.reduce((sum, stratum) => sum + pick(stratum), 0);
	const values: Record<string, number | null | undefined> = {
		n1: count(({ before }) => before.domain.n),
		n2: count(({ now }) => now.domain.n),
		n_both: bothSeasons,
		total_y1: total.before?.value,
		se_total_y1: total.before?.standardError,
		total_y2: total.now?.value,
		se_total_y2: total.now?.standardError,
		cov_total_y: total.covariance,
		ratio1: ratio.before?.value,
		se_ratio1: ratio.before?.standardError,
		ratio2: ratio.now?.value,
		se_ratio2: ratio.now?.standardError,
		cov_ratio: ratio.covariance,
		diff_ratio: ratio.difference?.value,
		se_diff_ratio: ratio.difference?.standardError,
		rel_change_total: total.relative?.value,
		se_rel_change_total: total.relative?.standardError,
	};
	return Object.entries(values).map(([name, actual]) => ({
		at: `${row.variant} ${row.domain} ${name}`,
		expected: numberIn(row, name),
		actual: actual ?? null,
	}));
}
