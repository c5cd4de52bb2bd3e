import {
	CalibrationError,
	requireSample,
	type Calibration,
	type Sample,
} from "#app/estimate/calibration/calibration.ts";
import { independentBasis, residualsOf, type Auxiliary } from "#app/estimate/calibration/regression.ts";

/**
 * A grouping of the frame's operations, such as by size class: the group of each respondent, in the order of the
 * sample, and the count of operations in each group on the frame.
 */
export type Margin = { name: string; groups: readonly string[]; totals: ReadonlyMap<string, number> };

/** Sweeping ends when no cell moved by more than this share of all operations and every margin is met as closely. */
export type RakingOptions = { tolerance?: number; mostSweeps?: number };

/**
 * Post-stratification: each group's weights are scaled to its count on the frame, w* = w N_g / (sum of w in g).
 * @throws as `rake`.
 * Source: Holt and Smith, Post stratification (1979), from memory; formula 8 of the reference set. Checked: R survey 4.1-1
 * `postStratify`, in tests/reference.
 */
export function postStratify(sample: Sample, margin: Margin): Calibration {
	return rake(sample, [margin]);
}

/**
 * Raking to several margins: weights are scaled to each margin in turn, over and over, until all are met.
 * @returns weights, and residuals of the regression on all margins' groups by the weights before raking.
 * @throws {CalibrationError} when a group has a total and no respondent or the reverse, when the margins' totals differ
 *   by more than a billionth, and when they are not met within `mostSweeps`: then they contradict each other in groups
 *   that no respondent joins, or need more sweeps.
 * @throws {RangeError} when the sample cannot be, there is no margin, or a margin has another length or a negative total.
 * Source: Deming and Stephan (1940), from memory; formula 10 of the reference set. Checked: R survey 4.1-1 `rake` for
 * weights, `calibrate(calfun="raking")` for standard errors, in tests/reference.
 */
export function rake(
	sample: Sample,
	margins: readonly Margin[],
	{ tolerance = 1e-13, mostSweeps = 1000 }: RakingOptions = {},
): Calibration {
	requireSample(sample);
	requireMargins(margins, sample.operations.length);
	const weights = sample.operations.map(({ weight }) => weight);
	// All operations that share every group move together: cells are raked, not operations.
	const keys = sample.operations.map((_, i) => JSON.stringify(margins.map(({ groups }) => groups[i])));
	const cells = new Map<string, Cell>();
	for (const [i, key] of keys.entries()) {
		const cell = cells.get(key) ?? { groups: margins.map(({ groups }) => groups[i]!), base: 0, total: 0 };
		cells.set(key, { ...cell, base: cell.base + weights[i]!, total: cell.total + weights[i]! });
	}
	const sweeps = sweepUntilMet([...cells.values()], margins, { tolerance, mostSweeps });

	const factors = keys.map((key) => cells.get(key)!.total / cells.get(key)!.base);
	const basis = independentBasis(margins.flatMap(indicatorsOf), weights);
	return {
		weights: weights.map((weight, i) => weight * factors[i]!),
		factors,
		unexplained: (values) => residualsOf(values, basis, weights),
		sweeps,
	};
}

type Cell = { groups: string[]; base: number; total: number };

/** @returns after how many sweeps every margin was met. */
function sweepUntilMet(cells: Cell[], margins: readonly Margin[], options: Required<RakingOptions>): number {
	const size = sumOf(margins[0]!.totals.values());
	for (let sweep = 0; sweep < options.mostSweeps; sweep++) {
		const before = cells.map(({ total }) => total);
		for (const [m, { totals }] of margins.entries()) scaleTo(cells, m, totals);
		const moved = Math.max(...cells.map(({ total }, i) => Math.abs(total - before[i]!)));
		if (moved < options.tolerance * size && farthest(cells, margins) <= options.tolerance * size) return sweep + 1;
	}
	throw new CalibrationError(
		"not_converged",
		`margins ${margins.map(({ name }) => name).join(", ")} are not met together after ${options.mostSweeps} sweeps`,
	);
}

function scaleTo(cells: Cell[], m: number, totals: ReadonlyMap<string, number>): void {
	const found = groupTotals(cells, m);
	for (const cell of cells) cell.total *= totals.get(cell.groups[m]!)! / found.get(cell.groups[m]!)!;
}

/** How far the group farthest from its total is from it. */
function farthest(cells: Cell[], margins: readonly Margin[]): number {
	const misses = margins.flatMap(({ totals }, m) => {
		const found = groupTotals(cells, m);
		return [...found].map(([group, total]) => Math.abs(total - totals.get(group)!));
	});
	return Math.max(...misses);
}

function groupTotals(cells: Cell[], m: number): Map<string, number> {
	const found = new Map<string, number>();
	for (const { groups, total } of cells) found.set(groups[m]!, (found.get(groups[m]!) ?? 0) + total);
	return found;
}

/** A margin as auxiliaries: one for each group, 1 for who is in it. */
export function indicatorsOf({ name, groups, totals }: Margin): Auxiliary[] {
	return [...totals].map(([group, total]) => ({
		name: `${name} ${group}`,
		values: groups.map((own) => (own === group ? 1 : 0)),
		total,
	}));
}

function requireMargins(margins: readonly Margin[], operations: number): void {
	if (margins.length === 0 || operations === 0) throw new RangeError("nothing to calibrate to, or nobody to calibrate");
	for (const margin of margins) requireMargin(margin, operations);
	const [first, ...others] = margins.map(({ name, totals }) => ({ name, size: sumOf(totals.values()) }));
	for (const { name, size } of others) {
		if (Math.abs(size - first!.size) > 1e-9 * first!.size) {
			throw new CalibrationError(
				"totals_differ",
				`margin ${first!.name} counts ${first!.size} operations, margin ${name} ${size}`,
			);
		}
	}
}

function requireMargin({ name, groups, totals }: Margin, operations: number): void {
	if (groups.length !== operations) throw new RangeError(`margin ${name} groups ${groups.length} of ${operations}`);
	const present = new Set(groups);
	for (const [group, total] of totals) {
		if (!(total >= 0 && Number.isFinite(total))) throw new RangeError(`${name} ${group} cannot count ${total}`);
		if (total > 0 && !present.has(group)) {
			throw new CalibrationError("group_without_respondents", `${name} ${group} counts ${total}, and nobody answered`);
		}
	}
	for (const group of present) {
		if (!totals.get(group)) {
			throw new CalibrationError("group_without_total", `${name} ${group} has respondents, but no count on the frame`);
		}
	}
}

function sumOf(values: Iterable<number>): number {
	let sum = 0;
	for (const value of values) sum += value;
	return sum;
}
