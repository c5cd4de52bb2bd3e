import type { PairedMoments } from "#app/lib/paired-moments.ts";
import { domainTotals, type DomainStratum } from "#app/estimate/domain.ts";
import { normalInterval, type Interval } from "#app/estimate/interval.ts";
import { linearize, residualSum, type EstimateKind, type Linearized } from "#app/estimate/linearize.ts";
import { linearizedVariance, withZeros } from "#app/estimate/variance.ts";
import type { Figure } from "#app/estimate/estimators.ts";

/**
 * One stratum in two seasons, seen from a domain. A season in which nobody of the stratum answered is null. Strata are the
 * same in both: an operation keeps the stratum of its first season's frame, and strata joined in one season are joined
 * alike in the other.
 */
export type TwoSeasonStratum = {
	before: DomainStratum | null;
	now: DomainStratum | null;
	/** Operations of the stratum on both frames (0 leaves out the finite population correction) and those that answered
	 * both; `domain` holds the latter's answers inside the domain. */
	both: { frameSize: number; respondents: number; domain: PairedMoments };
};

/** An estimate whose standard error can be missing. */
export type UncertainFigure = { value: number; standardError: number | null };

/** Both seasons' figures and their difference; null where a season or a base has no answers. */
export type Change = {
	before: UncertainFigure | null;
	now: UncertainFigure | null;
	covariance: number | null;
	/** This season less the one before, in units of the figures. */
	difference: UncertainFigure | null;
	/** This season over the one before, less 1: a fraction. Null where the one before is 0. */
	relative: UncertainFigure | null;
};

/**
 * Change of a figure between two seasons. Operations that answered both make the two figures move together, and the
 * covariance takes that into account: leaving it out overstates the change's error where neighbours stay neighbours.
 * @param strata every stratum of the design, also those with nobody in the domain.
 * @returns standard errors in units of the figures, of `relative` as a fraction; null where the domain is so small that
 *   its estimated variance comes out below 0. A domain with one respondent gets the formula's 0 for a mean or a ratio:
 *   `changeOfCell` does not pass it on.
 * @throws {RangeError} as `linearizedVariance` does, and when more answered both seasons than answered one.
 * Source: formulas 12 and 13 of the reference set, variant b_fpc; Tam (1984), Berger (2004), Knottnerus and van Delden
 * (2012), from memory. Proved by enumeration of all samples in tests/reference.
 */
export function changeEstimate(kind: EstimateKind, strata: readonly TwoSeasonStratum[]): Change {
	const [before, now] = [seasonOf(kind, present(strata, "before")), seasonOf(kind, present(strata, "now"))];
	const covariance = before && now ? linearizedCovariance(strata, before.linearized, now.linearized) : 0;
	return differenceOf(before?.figure ?? null, now?.figure ?? null, covariance);
}

/** The difference of two seasons' figures that move together by a covariance. */
export function differenceOf(first: Figure | null, second: Figure | null, covariance: number): Change {
	const change: Change = { before: bareFigure(first), now: bareFigure(second), ...noChange };
	if (!first || !second) return change;
	const [variance1, variance2] = [first.standardError ** 2, second.standardError ** 2];
	const difference = uncertain(second.value - first.value, variance1 + variance2 - 2 * covariance);
	if (first.value === 0) return { ...change, covariance, difference };
	const quotient = second.value / first.value;
	const variance = (variance2 + quotient ** 2 * variance1 - 2 * quotient * covariance) / first.value ** 2;
	return { ...change, covariance, difference, relative: uncertain(quotient - 1, variance) };
}

const noChange = { covariance: null, difference: null, relative: null };

/**
 * Covariance of two seasons' figures over the same domain: the sum over strata of (w1 w2 n_c - N_c) s12, where s12 is the
 * covariance of the residuals over ALL n_c operations of the stratum that answered both, those outside the domain being
 * zeros. The bracket is negative where fewer answered both than chance would give; its sign stays. It is 0 where
 * everybody answered both times, and a stratum with fewer than two that answered both adds 0.
 * @returns in units of the two figures multiplied.
 * @throws {RangeError} when more answered both seasons than answered one or are on both frames.
 */
export function linearizedCovariance(strata: readonly TwoSeasonStratum[], before: Linearized, now: Linearized): number {
	let covariance = 0;
	for (const stratum of strata) {
		requireBoth(stratum);
		const { frameSize, respondents, domain } = stratum.both;
		if (respondents < 2 || domain.n === 0 || !stratum.before || !stratum.now) continue;
		const bracket = stratum.before.weight * stratum.now.weight * respondents - frameSize;
		const spread = residualProducts(stratum.both, before, now);
		covariance += (bracket * spread) / ((respondents - 1) * before.scale * now.scale);
	}
	return covariance;
}

/** Sum of products of the two seasons' residuals about their means over all that answered both, unscaled. */
export function residualProducts(
	{ respondents, domain }: { respondents: number; domain: PairedMoments },
	before: Pick<Linearized, "slope" | "intercept">,
	now: Pick<Linearized, "slope" | "intercept">,
): number {
	if (domain.n === 0) return 0;
	const { n, mYY, mYX, mXY, mXX } = domain;
	const [slope1, slope2] = [before.slope.high, now.slope.high];
	const inside = mYY - slope2 * mYX - slope1 * mXY + slope1 * slope2 * mXX;
	const sums: [number, number] = [
		residualSum(before, { n, sumY: domain.sumYBefore, sumX: domain.sumXBefore }),
		residualSum(now, { n, sumY: domain.sumYNow, sumX: domain.sumXNow }),
	];
	return withZeros(inside, sums, n, respondents);
}

/** Why a change or its standard error is missing. */
export type MissingChange = "no_respondents" | "one_respondent" | "no_base" | "too_few";

export type CellChange = {
	change: Change;
	/** Ends of the 95 percent interval of the difference. */
	interval: Interval | null;
	respondents: { before: number; now: number; both: number };
	missing: MissingChange | null;
};

/**
 * The change of one measure, crop and area as it may be shown: without standard errors where one operation answered in
 * either season, since one answer has no spread to judge by. `missing` says why something is null.
 */
export function changeOfCell(kind: EstimateKind, strata: readonly TwoSeasonStratum[]): CellChange {
	return toldChange(changeEstimate(kind, strata), {
		before: domainTotals(present(strata, "before")).respondents,
		now: domainTotals(present(strata, "now")).respondents,
		both: strata.reduce((sum, { both }) => sum + both.domain.n, 0),
	});
}

/** A change as it may be shown, by how many answered in the area. */
export function toldChange(change: Change, respondents: CellChange["respondents"]): CellChange {
	const fewest = Math.min(respondents.before, respondents.now);
	const cell = { change, interval: null, respondents };
	if (fewest === 0) return { ...cell, missing: "no_respondents" };
	if (fewest === 1) return { ...cell, change: withoutErrors(change), missing: "one_respondent" };
	if (!change.difference) return { ...cell, missing: "no_base" };
	const { value, standardError } = change.difference;
	if (standardError === null) return { ...cell, missing: "too_few" };
	return { ...cell, interval: normalInterval({ value, standardError }), missing: null };
}

const bareFigure = (figure: Figure | null) => figure && { value: figure.value, standardError: figure.standardError };

const bare = (figure: UncertainFigure | null) => figure && { ...figure, standardError: null };

function withoutErrors({ before, now, difference, relative }: Change): Change {
	return {
		before: bare(before),
		now: bare(now),
		covariance: null,
		difference: bare(difference),
		relative: bare(relative),
	};
}

/** The strata of one season that hold respondents. */
function present(strata: readonly TwoSeasonStratum[], season: "before" | "now"): DomainStratum[] {
	return strata.flatMap((stratum) => stratum[season] ?? []);
}

function seasonOf(
	kind: EstimateKind,
	strata: readonly DomainStratum[],
): { figure: Figure; linearized: Linearized } | null {
	// The total of nobody's answers is no figure: a season without answers has no change.
	const linearized = domainTotals(strata).respondents > 0 ? linearize(kind, strata) : null;
	if (!linearized) return null;
	const standardError = Math.sqrt(linearizedVariance(strata, linearized));
	return { figure: { value: linearized.value, standardError }, linearized };
}

function uncertain(value: number, variance: number): UncertainFigure {
	return { value, standardError: variance >= 0 ? Math.sqrt(variance) : null };
}

function requireBoth({ before, now, both }: TwoSeasonStratum): void {
	const most = Math.min(before?.respondents ?? 0, now?.respondents ?? 0);
	const correction = both.frameSize === 0 || both.respondents <= both.frameSize;
	if (both.domain.n > both.respondents || both.respondents > most || !correction) {
		throw new RangeError(
			`a stratum cannot have ${both.respondents} of ${both.frameSize} answer both seasons, ${most} one, ${both.domain.n} inside`,
		);
	}
}
