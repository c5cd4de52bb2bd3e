import type { WeighedAnswers } from "#app/estimate/calibration/blocks.ts";
import { contribution, unexplainedVariances } from "#app/estimate/calibration/estimate.ts";
import { type CellParts, joinsAmong } from "#app/estimate/cell.ts";
import type { DayParts } from "#app/estimate/days.ts";
import type { WeightedMoments } from "#app/estimate/domain.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { proportionInterval } from "#app/estimate/interval.ts";
import { type EstimateKind, linearize } from "#app/estimate/linearize.ts";
import { distribution, quantileByShare } from "#app/estimate/quantile.ts";
import type { ToldAnswer } from "#app/tally/tally.ts";

/** What is summed of an answer: of a measure itself, or 1 and 0 for a share of operations. */
export type Summed = (answer: ToldAnswer) => { y: number; x: number };
const asTold: Summed = ({ y, x }) => ({ y, x });

/** The answers of an area as the estimators take them, each by itself with its weight. */
export function weightedParts(
	{ answers, weights }: WeighedAnswers,
	inside: readonly number[],
	summed: Summed = asTold,
): WeightedMoments[] {
	return inside.map((i) => {
		const { y, x } = summed(answers[i]!);
		return { weight: weights[i]!, domain: { n: 1, sumY: y, sumX: x, mYY: 0, mXX: 0, mXY: 0 } };
	});
}

/**
 * The figure of an area and what each stratum adds to its variance, by place in `strata.strata`: of what the totals that
 * weights were calibrated to do not explain. Strata in which everybody answered, or that share nothing with the area, add 0.
 * @param inside places of the area's answers.
 * @returns null where there is nothing to divide by.
 */
export function weighedFigure(
	kind: EstimateKind,
	weighed: WeighedAnswers,
	inside: readonly number[],
	summed: Summed = asTold,
): (Figure & { variances: Map<number, number> }) | null {
	const linearized = linearize(kind, weightedParts(weighed, inside, summed));
	if (!linearized) return null;
	// Only the blocks that share answers with the area: most areas lie in one state.
	const touched = new Map<number, number[]>();
	for (const i of inside) {
		const place = weighed.blockOf[i];
		if (!place) continue;
		const values = touched.get(place.block) ?? weighed.blocks[place.block]!.members.map(() => 0);
		values[place.member] = contribution(linearized, summed(weighed.answers[i]!));
		touched.set(place.block, values);
	}
	const variances = new Map<number, number>();
	for (const [block, values] of touched) {
		const { sample, calibration, places } = weighed.blocks[block]!;
		for (const [at, variance] of unexplainedVariances(sample, calibration, values).entries())
			variances.set(places[at]!, variance);
	}
	let variance = 0;
	for (const one of variances.values()) variance += one;
	return { value: linearized.value, standardError: Math.sqrt(variance), variances };
}

/** The parts of an area's estimate, for `cellOf`. */
export function cellParts(kind: EstimateKind, weighed: WeighedAnswers, inside: readonly number[]): CellParts {
	return {
		...standing(weighed, inside),
		value: () => linearize(kind, weightedParts(weighed, inside))?.value ?? null,
		figure: () => weighedFigure(kind, weighed, inside),
	};
}

/** The parts of an area's figure of days, for `dayOf`. */
export function dayParts(weighed: WeighedAnswers, inside: readonly number[]): DayParts {
	const { freedom, ...parts } = standing(weighed, inside);
	const steps = distribution(
		inside.map((i) => ({ weight: weighed.weights[i]!, counts: [{ value: weighed.answers[i]!.y, n: 1 }] })),
	);
	const shareAt = (value: number) => ({
		share: weighedFigure("ratio", weighed, inside, atOrBefore(value))!,
		respondents: parts.respondents,
		freedom,
	});
	return {
		...parts,
		steps,
		median: () => quantileByShare(steps, 0.5, shareAt, { interval: proportionInterval }),
	};
}

/** Of a day: 1 for who was there by then. */
export function atOrBefore(day: number): Summed {
	return ({ y }) => ({ y: y <= day ? 1 : 0, x: 1 });
}

function standing({ answers, strata, stratumOf }: WeighedAnswers, inside: readonly number[]) {
	const present = new Set(inside.map((i) => stratumOf[i]!));
	return {
		respondents: inside.length,
		joins: joinsAmong(strata, new Set(inside.map((i) => answers[i]!.stratumKey))),
		everybody: [...present].every((at) => strata.strata[at]!.respondents === strata.strata[at]!.frameSize),
		freedom: inside.length - present.size,
	};
}
