import { addPairedMoments, emptyPairedMoments, type PairedMoments } from "#app/lib/paired-moments.ts";
import type { TwoSeasonStratum } from "#app/estimate/change.ts";
import { domainStrata, type StratumTally } from "#app/estimate/domain.ts";
import { joinStrata, type Join, type JoinedStratum } from "#app/estimate/strata.ts";
import type { FrameStratum } from "#app/tally/tally.ts";

/** One season's strata for a crop, and how many of each answered the measure. */
export type SeasonFrame = { frame: readonly FrameStratum[]; respondents: ReadonlyMap<string, number> };

/** By stratum: operations on both seasons' frames, and those that answered both. Strata not named have none. */
export type BothSeasons = { frame: ReadonlyMap<string, number>; respondents: ReadonlyMap<string, number> };

type Counts = Pick<JoinedStratum, "frameSize" | "respondents">;

/** Strata that are the same in both seasons, with the counts of each and of those common to both. */
export type JoinedSeasons = {
	strata: { stratumKeys: string[]; before: Counts; now: Counts; both: Counts }[];
	joins: Join[];
};

/**
 * Joins strata alike in two seasons, by the rule of `joinStrata`, until each has two respondents in both. Where a season by
 * itself would have joined fewer, its figure in a change differs a little from the one published for it alone.
 * An operation on both frames counts in both seasons in the stratum that the first gave it.
 * @throws {RangeError} as `joinStrata`.
 */
export function joinSeasons(before: SeasonFrame, now: SeasonFrame, both: BothSeasons): JoinedSeasons {
	const strata = new Map([...now.frame, ...before.frame].map((stratum) => [stratum.stratumKey, stratum]));
	const sizes = [before, now].map(
		({ frame }) => new Map(frame.map((stratum) => [stratum.stratumKey, stratum.frameSize])),
	);
	const frame = [...strata.values()].map((stratum) => ({
		...stratum,
		frameSize: Math.max(...sizes.map((size) => size.get(stratum.stratumKey) ?? 0)),
	}));
	// As many as in the poorer season: joined until two, both seasons have two.
	const fewest = new Map(
		frame.map(({ stratumKey }) => [
			stratumKey,
			Math.min(before.respondents.get(stratumKey) ?? 0, now.respondents.get(stratumKey) ?? 0),
		]),
	);
	const joined = joinStrata(frame, fewest);
	return {
		strata: joined.strata.map(({ stratumKeys }) => ({
			stratumKeys,
			before: counted(stratumKeys, sizes[0]!, before.respondents),
			now: counted(stratumKeys, sizes[1]!, now.respondents),
			both: counted(stratumKeys, both.frame, both.respondents),
		})),
		joins: joined.joins,
	};
}

/**
 * The joined strata of two seasons seen from an area, as `changeEstimate` takes them.
 * @param area the area's tally rows of each season, and of the operations that answered both.
 * @throws {RangeError} when an area has more respondents than its stratum.
 */
export function twoSeasonStrata(
	{ strata }: JoinedSeasons,
	area: {
		before: readonly StratumTally[];
		now: readonly StratumTally[];
		both: readonly (PairedMoments & { stratumKey: string })[];
	},
): TwoSeasonStratum[] {
	return strata.map(({ stratumKeys, before, now, both }) => {
		const keys = new Set(stratumKeys);
		const seen = (counts: Counts, tallies: readonly StratumTally[]) => {
			const own = tallies.filter(({ stratumKey }) => keys.has(stratumKey));
			return domainStrata({ strata: [{ stratumKeys, ...counts }], joins: [] }, own)[0] ?? null;
		};
		const pairs = area.both.filter(({ stratumKey }) => keys.has(stratumKey));
		const domain = pairs.reduce<PairedMoments>((sum, pair) => addPairedMoments(sum, pair), emptyPairedMoments);
		return { before: seen(before, area.before), now: seen(now, area.now), both: { ...both, domain } };
	});
}

function counted(keys: string[], size: ReadonlyMap<string, number>, answered: ReadonlyMap<string, number>): Counts {
	return { frameSize: sumOver(keys, size), respondents: sumOver(keys, answered) };
}

function sumOver(keys: readonly string[], counts: ReadonlyMap<string, number>): number {
	return keys.reduce((sum, key) => sum + (counts.get(key) ?? 0), 0);
}
