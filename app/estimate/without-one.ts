import { domainStrata, domainTotals, type StratumTally } from "#app/estimate/domain.ts";
import type { EstimateKind } from "#app/estimate/linearize.ts";
import { joinStrata, respondentsByStratum } from "#app/estimate/strata.ts";
import type { FrameStratum } from "#app/tally/tally.ts";

/** An area's weighted totals of one measure and crop, and what each stratum's operations count for in them. */
export type Standing = { totalY: number; totalX: number; weightOf: ReadonlyMap<string, number> };

/**
 * @param frame strata of the crop. @param tallies of one measure and crop, every county. @param inArea which are the area's.
 */
export function standingOf<T extends StratumTally>(
	frame: readonly FrameStratum[],
	tallies: readonly T[],
	inArea: (tally: T) => boolean,
): Standing {
	const joined = joinStrata(frame, respondentsByStratum(tallies));
	const { totalY, totalX } = domainTotals(domainStrata(joined, tallies.filter(inArea)));
	const weightOf = joined.strata.flatMap(({ stratumKeys, frameSize, respondents }) =>
		respondents > 0 ? stratumKeys.map((key): [string, number] => [key, frameSize / respondents]) : [],
	);
	return { totalY, totalX, weightOf: new Map(weightOf) };
}

/**
 * An area's figure as it is, and as it would be without one operation's answer, the others weighing what they do now. For
 * putting odd answers in the order of how much they matter: the weights of an estimate made without it would differ.
 * @returns null where there is no figure to begin with; `without` is null where none would be left.
 */
export function withoutOne(
	kind: EstimateKind,
	{ totalY, totalX, weightOf }: Standing,
	{ stratumKey, y, x }: { stratumKey: string; y: number; x: number },
): { value: number; without: number | null } | null {
	const weight = weightOf.get(stratumKey) ?? 0;
	if (kind === "total") return { value: totalY, without: totalY - weight * y };
	if (totalX === 0) return null;
	const restX = totalX - weight * x;
	// What remains of subtracting all that there was is rounding, and no base.
	const isRest = Math.abs(restX) > 1e-9 * Math.abs(totalX);
	return { value: totalY / totalX, without: isRest ? (totalY - weight * y) / restX : null };
}

/** By which share of itself a figure moves, 0 to 1; 1 where there would be none. */
export function shareMoved({ value, without }: { value: number; without: number | null }): number {
	if (without === null) return 1;
	const largest = Math.max(Math.abs(value), Math.abs(without));
	return largest === 0 ? 0 : Math.min(1, Math.abs(value - without) / largest);
}
