import type { WeighedAnswers } from "#app/estimate/calibration/blocks.ts";
import { contribution } from "#app/estimate/calibration/estimate.ts";
import { weighedFigure, weightedParts } from "#app/estimate/calibration/weighed-figure.ts";
import { type CellChange, differenceOf, toldChange } from "#app/estimate/change.ts";
import { type EstimateKind, linearize } from "#app/estimate/linearize.ts";
import { respondentsByStratum } from "#app/estimate/strata.ts";
import { joinSeasons } from "#app/estimate/two-seasons.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { FrameStratum } from "#app/tally/tally.ts";

/** One season's answers with their weights, and the strata of its frame for the crop. */
export type WeighedSeason = { weighed: WeighedAnswers; frame: readonly FrameStratum[] };

/**
 * `changeOfCell` by calibrated weights: each season's figure as it is told for itself, and the covariance through operations
 * that answered both, of what neither season's known totals explain. Strata are joined alike in both for the covariance.
 * @param isInside which counties are the area's.
 * @param onBothFrames operations on both frames, by stratum.
 * Source: formulas 9 and 13 of the reference set together. With design weights it is `changeOfCell`.
 */
export function changeOfWeighed(
	kind: EstimateKind,
	before: WeighedSeason,
	now: WeighedSeason,
	isInside: (countyFips: string) => boolean,
	onBothFrames: ReadonlyMap<string, number>,
): CellChange {
	const [first, second] = [before, now].map(({ weighed }) => {
		const inside = weighed.answers.flatMap(({ countyFips }, i) => (isInside(countyFips) ? [i] : []));
		return { inside, figure: inside.length > 0 ? weighedFigure(kind, weighed, inside) : null };
	});
	const pairs = pairsOf(kind, [before.weighed, first!.inside], [now.weighed, second!.inside]);
	const respondents = {
		before: first!.inside.length,
		now: second!.inside.length,
		both: pairs.filter(({ isInside: inBoth }) => inBoth).length,
	};
	const covariance = covarianceOf(pairs, before, now, onBothFrames);
	return toldChange(differenceOf(first!.figure, second!.figure, covariance), respondents);
}

type Pair = { stratumKey: string; before: number; now: number; isInside: boolean };

/** What each operation that answered both times, in one stratum, adds to either figure's error. */
function pairsOf(kind: EstimateKind, before: [WeighedAnswers, number[]], now: [WeighedAnswers, number[]]): Pair[] {
	const [first, second] = [errorsOf(kind, ...before), errorsOf(kind, ...now)];
	const placeOf = new Map(before[0].answers.map(({ operationId }, i) => [operationId, i]));
	const [insideBefore, insideNow] = [new Set(before[1]), new Set(now[1])];
	return now[0].answers.flatMap(({ operationId, stratumKey }, i) => {
		const at = placeOf.get(operationId);
		if (at === undefined || before[0].answers[at]!.stratumKey !== stratumKey) return [];
		const isInside = insideBefore.has(at) && insideNow.has(i);
		return [{ stratumKey, before: first[at]!, now: second[i]!, isInside }];
	});
}

/** The unexplained part of each answer's error, times its new over its design weight. 0 where nothing can be estimated. */
function errorsOf(kind: EstimateKind, weighed: WeighedAnswers, inside: readonly number[]): number[] {
	const errors = weighed.answers.map(() => 0);
	const linearized = linearize(kind, weightedParts(weighed, inside));
	if (!linearized || inside.length === 0) return errors;
	for (const i of inside) errors[i] = contribution(linearized, weighed.answers[i]!);
	for (const { calibration, members } of weighed.blocks) {
		const rest = calibration.unexplained(members.map((i) => errors[i]!));
		for (const [k, i] of members.entries()) errors[i] = calibration.factors[k]! * rest[k]!;
	}
	return errors;
}

function covarianceOf(
	pairs: readonly Pair[],
	before: WeighedSeason,
	now: WeighedSeason,
	onBothFrames: ReadonlyMap<string, number>,
): number {
	const [first, second] = [before, now].map(({ weighed, frame }) => ({ frame, respondents: counted(weighed.answers) }));
	const { strata } = joinSeasons(first!, second!, { frame: onBothFrames, respondents: counted(pairs) });
	const pairsIn = groupBy(pairs, ({ stratumKey }) => stratumKey);
	let covariance = 0;
	for (const { stratumKeys, ...seasons } of strata) {
		const own = stratumKeys.flatMap((key) => pairsIn.get(key) ?? []);
		if (own.length < 2) continue;
		const [w1, w2] = [seasons.before, seasons.now].map(({ frameSize, respondents }) => frameSize / respondents);
		covariance += ((w1! * w2! * own.length - seasons.both.frameSize) * productsOf(own)) / (own.length - 1);
	}
	return covariance;
}

function counted(answers: readonly { stratumKey: string }[]): Map<string, number> {
	return respondentsByStratum(answers.map(({ stratumKey }) => ({ stratumKey, n: 1 })));
}

/** Sum of products about the means. */
function productsOf(pairs: readonly Pair[]): number {
	const meanOf = (key: "before" | "now") => pairs.reduce((sum, pair) => sum + pair[key], 0) / pairs.length;
	const [first, second] = [meanOf("before"), meanOf("now")];
	return pairs.reduce((sum, { before, now }) => sum + (before - first) * (now - second), 0);
}
