import { gainsOfOneMore } from "#app/estimate/allocation.ts";
import { domainTotals } from "#app/estimate/domain.ts";
import { linearize } from "#app/estimate/linearize.ts";
import { residualMoments } from "#app/estimate/variance.ts";
import { momentsOf } from "#app/lib/moments.ts";
import {
	numberIn,
	readCsv,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";

/** What one more answer in each stratum takes off the variance of a ratio, and the rankings that follow from it. */
export async function checkAllocation(folder: string, file: string): Promise<Checked> {
	const operations = await readCsv(folder, "allocation_toy.csv");
	const strata = (await readCsv(folder, "allocation_strata.csv")).map((row) => seenIn(row, operations));
	const ours = gainsOfOneMore("ratio", strata)!;
	const linearized = linearize("ratio", strata)!;
	// The derivative overstates the gain by (n + 1)/n; it is not shipped.
	const derivatives = strata.map(({ respondents }, i) => (-ours.gains[i]!.reduction * (respondents + 1)) / respondents);
	const expected = await readCsv(folder, file);
	const comparisons: Comparison[] = expected.flatMap((row) => {
		const i = strata.findIndex(({ name }) => name === row.stratum);
		const [stratum, gain] = [strata[i]!, ours.gains[i]!];
		const values: Record<string, number> = {
			N: stratum.weight * stratum.respondents,
			n: stratum.respondents,
			response_rate: stratum.responseRate,
			s2_residual: residualMoments(stratum, linearized).spread / (stratum.respondents - 1),
			X_hat: domainTotals(strata).totalX,
			ratio: ours.figure.value,
			variance: ours.figure.standardError ** 2,
			se: ours.figure.standardError,
			derivative: derivatives[i]!,
			reduction_one_more: gain.reduction,
			se_after: gain.standardErrorAfter,
			reduction_per_call: gain.perAttempt,
			rank_derivative: rank(derivatives.map(Math.abs), i),
			rank_exact: rank(
				ours.gains.map(({ reduction }) => reduction),
				i,
			),
			rank_per_call: rank(
				ours.gains.map(({ perAttempt }) => perAttempt),
				i,
			),
		};
		return Object.keys(row)
			.filter((name) => name !== "stratum")
			.map((name) => ({ at: `${row.stratum} ${name}`, expected: numberIn(row, name), actual: values[name] ?? null }));
	});
	return { comparisons, notCovered: 0 };
}

function seenIn(row: Row, operations: Row[]) {
	const own = operations.filter((operation) => operation.stratum === row.stratum);
	const frameSize = requiredNumber(row, "N");
	return {
		name: row.stratum,
		weight: frameSize / own.length,
		samplingFraction: own.length / frameSize,
		respondents: own.length,
		domain: momentsOf(own.map((each) => ({ y: requiredNumber(each, "y"), x: requiredNumber(each, "x") }))),
		responseRate: requiredNumber(row, "response_rate"),
	};
}

/** 1 for the largest. */
function rank(values: number[], i: number): number {
	return 1 + values.filter((value) => value > values[i]!).length;
}
