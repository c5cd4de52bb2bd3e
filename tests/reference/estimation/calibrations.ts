import type { Calibration } from "#app/estimate/calibration/calibration.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import { postStratify, rake, type Margin } from "#app/estimate/calibration/raking.ts";
import type { Auxiliary } from "#app/estimate/calibration/regression.ts";
import {
	isObject,
	readCsv,
	readJson,
	requiredNumber,
	type Checked,
	type Comparison,
	type Json,
} from "#tests/reference/checking.ts";
import { column, designOf, type Design, type Quantity } from "#tests/reference/estimation/design.ts";
import { rowsOf, sampleOf } from "#tests/reference/estimation/estimating.ts";

type Totals = { [key: string]: Json };

/**
 * The calibrations of the simple random sample of schools by the name of their block. `rake_default_control` stops when
 * no cell's total moves by one school, so it is not at the fixed point, and its residuals are the package's own.
 */
export function calibrationsOf(design: Design, totals: Totals): Record<string, Calibration> {
	const sample = sampleOf(design);
	const margin = (name: string): Margin => ({
		name,
		groups: rowsOf(design).map((row) => row[name] ?? ""),
		totals: new Map(Object.entries(isObject(totals[name]) ? totals[name] : {}).map(([group, n]) => [group, Number(n)])),
	});
	const known = (name: string, values: Quantity, total: Json | undefined): Auxiliary => ({
		name,
		values: rowsOf(design).map(values),
		total: Number(total),
	});
	const count = known("count", () => 1, totals.N);
	const api99 = known("api99", column("api99"), totals.total_api99);
	const types = ["H", "M"].map((type) =>
		known(type, (row) => (row.stype === type ? 1 : 0), isObject(totals.stype) ? totals.stype[type] : undefined),
	);
	const margins = [margin("stype"), margin("sch.wide")];
	return {
		poststratified: postStratify(sample, margin("stype")),
		rake_default_control: {
			...rake(sample, margins, { tolerance: 1 / Number(totals.N) }),
			unexplained: unexplainedAsInPackage(
				sample.operations.map(({ weight }) => weight),
				margins,
			),
		},
		rake_converged: rake(sample, margins),
		calibrate_raking_margins: rake(sample, margins),
		greg_stype_api99: calibrateLinear(sample, [count, ...types, api99]),
		greg_api99: calibrateLinear(sample, [count, api99]),
	};
}

/**
 * The package's residuals after raking that has stopped short: ten sweeps that take each margin's plain means out of the
 * values, weighted as they were when the last sweep had come to that margin. At the fixed point this is the regression's
 * residual to 1e-11; one school short of it, standard errors differ by 4e-7.
 */
function unexplainedAsInPackage(base: number[], margins: Margin[]): Calibration["unexplained"] {
	let weights = base;
	let reached: number[][] = [];
	for (let moved = Infinity; moved >= 1;) {
		const before = weights;
		reached = margins.map((margin) => (weights = scaledTo(weights, margin)));
		const cells = groupSums(weights, crossed(margins));
		moved = Math.max(
			...[...groupSums(before, crossed(margins))].map(([cell, sum]) => Math.abs(cells.get(cell)! - sum)),
		);
	}
	return (values) => {
		let rest = values.map((value, i) => value * weights[i]!);
		for (let sweep = 0; sweep < 10; sweep++) {
			for (const [m, { groups }] of margins.entries()) rest = withoutMeans(rest, groups, reached[m]!);
		}
		return rest.map((value, i) => value / weights[i]!);
	};
}

function crossed(margins: Margin[]): string[] {
	return margins[0]!.groups.map((_, i) => margins.map(({ groups }) => groups[i]).join(" "));
}

function groupSums(values: readonly number[], groups: readonly string[]): Map<string, number> {
	const sums = new Map<string, number>();
	for (const [i, value] of values.entries()) sums.set(groups[i]!, (sums.get(groups[i]!) ?? 0) + value);
	return sums;
}

function scaledTo(weights: readonly number[], { groups, totals }: Margin): number[] {
	const sums = groupSums(weights, groups);
	return weights.map((weight, i) => (weight * totals.get(groups[i]!)!) / sums.get(groups[i]!)!);
}

function withoutMeans(values: number[], groups: readonly string[], weights: readonly number[]): number[] {
	const plain = values.map((value, i) => value / weights[i]!);
	const [sums, counts] = [
		groupSums(plain, groups),
		groupSums(
			plain.map(() => 1),
			groups,
		),
	];
	return values.map((value, i) => value - (weights[i]! * sums.get(groups[i]!)!) / counts.get(groups[i]!)!);
}

export async function readTotals(folder: string): Promise<Totals> {
	const totals = await readJson(folder, "api_population_totals.json");
	if (!isObject(totals)) throw new Error("the population's totals are not an object");
	return totals;
}

const columns: Record<string, string> = {
	w_poststrat: "poststratified",
	w_rake_default: "rake_default_control",
	w_rake_converged: "rake_converged",
	w_greg_stype_api99: "greg_stype_api99",
	w_greg_api99: "greg_api99",
};

/** The weight of each school before and after each calibration. */
export async function checkWeights(folder: string, file: string): Promise<Checked> {
	const design = designOf(await readCsv(folder, "apisrs.csv"), "svydesign(id=~1,weights=~pw,fpc=~fpc)");
	const calibrations = calibrationsOf(design, await readTotals(folder));
	const places = new Map(rowsOf(design).map((row, i) => [row.cds, i]));
	const comparisons = (await readCsv(folder, file)).flatMap((row): Comparison[] => {
		const place = places.get(row.cds)!;
		return Object.keys(row)
			.filter((name) => name !== "cds")
			.map((name) => ({
				at: `${row.cds} ${name}`,
				expected: requiredNumber(row, name),
				actual:
					name === "w_base" ? design.strata[0]!.weight : (calibrations[columns[name] ?? ""]?.weights[place] ?? null),
			}));
	});
	return { comparisons, notCovered: 0 };
}

/** What a block tells of its weights: by group or cell, such as `E.No`, and the least and the largest factor. */
export function compareWeights(at: string, block: Totals, design: Design, calibration: Calibration): Comparison[] {
	const byGroup = new Map(
		rowsOf(design).flatMap((row, i) => {
			const weight = calibration.weights[i]!;
			return [
				[row.stype ?? "", weight],
				[`${row.stype}.${row["sch.wide"]}`, weight],
			] as const;
		}),
	);
	const groups = ["weights_by_stype", "cell_weights"].flatMap((name) =>
		Object.entries(isObject(block[name]) ? block[name] : {}).map(([group, expected]) => ({
			at: `${at}.${name}.${group}`,
			expected,
			actual: byGroup.get(group) ?? null,
		})),
	);
	const factors = { g_min: Math.min(...calibration.factors), g_max: Math.max(...calibration.factors) };
	const extremes = Object.entries(factors).flatMap(([name, actual]) =>
		name in block ? [{ at: `${at}.${name}`, expected: block[name], actual }] : [],
	);
	return [...groups, ...extremes];
}
