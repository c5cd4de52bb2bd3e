import { gainsOfOneMore } from "#app/estimate/allocation.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";
import type { EstimateKind } from "#app/estimate/linearize.ts";
import { groupBy } from "#app/lib/group-by.ts";

/** One county's part of one stratum of the frame. */
export type CallCell = {
	countyFips: string;
	stratumKey: string;
	/** Operations of the frame that may belong, and those of them that have answered. */
	frameSize: number;
	answered: number;
	/** Bearing trees of the same operations. */
	bearingTrees: number;
};

/** What one more answer from a cell would do. Both are 0 where nobody is left to ask, or nothing would be gained. */
export type CallWorth = Pick<CallCell, "countyFips" | "stratumKey"> & {
	/** For ordering: what it takes off the variance of the county's figure, times the county's trees; the largest is 1. */
	worth: number;
	/** The part of the variance of the county's figure that it takes off, 0 to 1. */
	share: number;
};

/**
 * The variance of what one operation of a stratum adds to a figure's error: the s² of the residuals, in the figure's unit
 * squared, by stratum.
 * @param strata the strata of the whole, each with the keys that it stands for.
 * @returns null where nothing shows any spread yet, as in `gainsOfOneMore`.
 */
export function spreadByStratum(
	kind: EstimateKind,
	strata: readonly (DomainStratum & { stratumKeys: readonly string[] })[],
): Map<string, number> | null {
	const found = gainsOfOneMore(kind, strata);
	if (!found) return null;
	return new Map(
		strata.flatMap(({ stratumKeys }, i) => stratumKeys.map((key) => [key, found.gains[i]!.residualVariance] as const)),
	);
}

/**
 * Whose answer is worth most: which cell's next answer narrows the figure of its county most, weighed by the county's trees.
 *
 * A county's figure rests on its own answers and, where these are few, on what the rest of its strata tells. With N
 * operations and n answers in a cell, its part of the county's variance is taken as (N T / t)² s² (1/(n + 1) - 1/(N + 1)),
 * where s² is the stratum's spread in the figure of the whole, T the trees of the whole and t those of the county: the
 * stratum counts as one answer, so that a county with none stands first, and not at infinity. One more answer takes
 * (N T / t)² s² / ((n + 1)(n + 2)) off it. Times t that is the fall of the variance over all counties, each by its trees.
 * @param spreads of `spreadByStratum`; null before there is any. Operations are then supposed to vary as their trees do.
 * @returns the cells in their order.
 * @throws {RangeError} when a cell has more answers than operations.
 * Source: Cochran, Sampling Techniques (1977), 5.5 and 5A.9 (strata after selection), from memory; the one answer that
 * the stratum stands for is the network's own.
 */
export function worthOfCalls(cells: readonly CallCell[], spreads: ReadonlyMap<string, number> | null): CallWorth[] {
	const all = cells.reduce((trees, cell) => trees + cell.bearingTrees, 0);
	const ofCounty = new Map(
		[...groupBy(cells, ({ countyFips }) => countyFips)].map(([county, own]) => {
			const trees = own.reduce((sum, cell) => sum + cell.bearingTrees, 0);
			return [county, { trees, variance: own.reduce((sum, cell) => sum + varianceOf(cell, trees, all, spreads), 0) }];
		}),
	);
	const told = cells.map((cell) => {
		const { trees, variance } = ofCounty.get(cell.countyFips)!;
		const fall = fallOf(cell, trees, all, spreads);
		return { cell, worth: trees * fall, share: variance > 0 ? fall / variance : 0 };
	});
	const most = Math.max(0, ...told.map(({ worth }) => worth));
	return told.map(({ cell: { countyFips, stratumKey }, worth, share }) => ({
		countyFips,
		stratumKey,
		worth: most > 0 ? worth / most : 0,
		share,
	}));
}

function varianceOf(cell: CallCell, trees: number, all: number, spreads: ReadonlyMap<string, number> | null): number {
	const { answered: n, frameSize } = cell;
	return unitVariance(cell, trees, all, spreads) * (1 / (n + 1) - 1 / (frameSize + 1));
}

function fallOf(cell: CallCell, trees: number, all: number, spreads: ReadonlyMap<string, number> | null): number {
	const { answered: n, frameSize } = cell;
	if (n > frameSize || n < 0) throw new RangeError(`${n} of ${frameSize} operations cannot have answered`);
	if (n === frameSize) return 0;
	return unitVariance(cell, trees, all, spreads) / ((n + 1) * (n + 2));
}

/** (N T / t)² s². */
function unitVariance(
	{ frameSize, bearingTrees, stratumKey }: CallCell,
	trees: number,
	all: number,
	spreads: ReadonlyMap<string, number> | null,
): number {
	if (trees === 0 || all === 0) return 0;
	const spread = spreads ? (spreads.get(stratumKey) ?? 0) : (bearingTrees / frameSize / all) ** 2;
	return ((frameSize * all) / trees) ** 2 * spread;
}
