import type { FrameStratum, Tally } from "#app/tally/tally.ts";

/** Why strata were joined: to the next size class, to the rest of the state, or to another state's stratum. */
export type JoinStep = "next_size" | "state" | "network";

/** A record of strata that are estimated as one, shown on the methods page of a release. */
export type Join = { stratumKeys: string[]; step: JoinStep };

/** One stratum as the estimators use it; more than one key where strata were joined. */
export type JoinedStratum = { stratumKeys: string[]; frameSize: number; respondents: number };

/** The strata of one measure and crop over the whole network, after joining. */
export type StrataFrame = { strata: JoinedStratum[]; joins: Join[] };

const enough = 2; // a variance needs two respondents

type Group = JoinedStratum & { stateFips: string; sizeClasses: number[]; step: JoinStep | null };

/**
 * Respondents of each stratum to the measure whose tallies are given: the n_h of the weights, over all counties.
 * An operation that answered the survey but not this question counts as not having answered, so that its weight
 * goes to the others of its stratum.
 * @param tallies all tallies of ONE measure and crop, of every county.
 */
export function respondentsByStratum(tallies: Iterable<Pick<Tally, "stratumKey" | "n">>): Map<string, number> {
	const respondents = new Map<string, number>();
	for (const { stratumKey, n } of tallies) respondents.set(stratumKey, (respondents.get(stratumKey) ?? 0) + n);
	return respondents;
}

/**
 * Joins strata until each has two respondents, and records what was joined.
 *
 * In each state, from the largest size class down, a stratum with fewer than two respondents is joined to the next
 * smaller class (the smallest to the next larger). If that is not enough, the whole state becomes one stratum. A
 * state that still has fewer than two joins the stratum of nearest size with most respondents elsewhere in the
 * network, so that its operations are neither lost from the totals nor given a variance of nothing.
 *
 * It must be done once for the whole network, not for each area: only then do the estimates of counties add up to
 * their state's.
 * @param frame every stratum of the frame for the crop, with the count of its operations.
 * @param respondents operations that answered, by stratum key; strata not named have none.
 * @returns strata with two respondents or more each, unless the whole network has fewer. Strata without operations
 *   are left out.
 * @throws {RangeError} when a stratum has more respondents than operations, is named twice or is not in the frame.
 */
export function joinStrata(frame: readonly FrameStratum[], respondents: ReadonlyMap<string, number>): StrataFrame {
	const groups = startingGroups(frame, respondents);
	const states = [...new Set(groups.map((group) => group.stateFips))];
	const joined = states.flatMap((state) => joinWithinState(groups.filter((group) => group.stateFips === state)));
	const all = joinAcrossStates(joined);
	return {
		strata: all.map(({ stratumKeys, frameSize, respondents: n }) => ({ stratumKeys, frameSize, respondents: n })),
		joins: all.flatMap(({ stratumKeys, step }) => (step ? [{ stratumKeys, step }] : [])),
	};
}

/** The strata as they are, for a design whose strata all have two respondents or were joined by another rule. */
export function unjoined(frame: readonly FrameStratum[], respondents: ReadonlyMap<string, number>): StrataFrame {
	const strata = startingGroups(frame, respondents).map(({ stratumKeys, frameSize, respondents: n }) => ({
		stratumKeys,
		frameSize,
		respondents: n,
	}));
	return { strata, joins: [] };
}

function startingGroups(frame: readonly FrameStratum[], respondents: ReadonlyMap<string, number>): Group[] {
	const sizes = new Map(frame.map((stratum) => [stratum.stratumKey, stratum.frameSize]));
	if (sizes.size !== frame.length) throw new RangeError("a stratum is named twice in the frame");
	for (const [stratumKey, n] of respondents) {
		const frameSize = sizes.get(stratumKey);
		if (frameSize === undefined) throw new RangeError(`stratum ${stratumKey} has respondents but is not in the frame`);
		if (!Number.isInteger(n) || n < 0 || n > frameSize) {
			throw new RangeError(`stratum ${stratumKey} cannot have ${n} respondents of ${frameSize} operations`);
		}
	}
	return frame
		.filter((stratum) => stratum.frameSize > 0)
		.toSorted((a, b) => a.sizeClass - b.sizeClass || (a.stratumKey < b.stratumKey ? -1 : 1))
		.map(({ stratumKey, stateFips, sizeClass, frameSize }) => ({
			stratumKeys: [stratumKey],
			stateFips,
			sizeClasses: [sizeClass],
			frameSize,
			respondents: respondents.get(stratumKey) ?? 0,
			step: null,
		}));
}

/** @param state one state's strata, smallest size class first. */
function joinWithinState(state: Group[]): Group[] {
	const groups = [...state];
	for (let i = groups.length - 1; i >= 0 && groups.length > 1; i--) {
		if (groups[i]!.respondents >= enough) continue;
		const at = i === 0 ? 0 : i - 1; // the smallest class has only a larger neighbour
		groups.splice(at, 2, merge([groups[at]!, groups[at + 1]!], "next_size"));
		if (groups[at]!.respondents < enough && groups.length > 1) return [merge(groups, "state")];
		i = at; // the joined stratum has enough; its smaller neighbours come next
	}
	return groups;
}

function joinAcrossStates(groups: Group[]): Group[] {
	const small = groups.find((group) => group.respondents < enough);
	const others = groups.filter((group) => group !== small);
	if (!small || others.length === 0) return groups;
	const able = others.filter((group) => group.respondents >= enough);
	const [nearest] = (able.length > 0 ? able : others).toSorted(
		(a, b) => sizeGap(small, a) - sizeGap(small, b) || b.respondents - a.respondents,
	);
	const joined = merge([nearest!, small], "network");
	return joinAcrossStates([...others.filter((group) => group !== nearest), joined]);
}

function sizeGap(a: Group, b: Group): number {
	return Math.min(...a.sizeClasses.flatMap((left) => b.sizeClasses.map((right) => Math.abs(left - right))));
}

function merge(groups: Group[], step: JoinStep): Group {
	return {
		stratumKeys: groups.flatMap((group) => group.stratumKeys),
		stateFips: groups[0]!.stateFips,
		sizeClasses: groups.flatMap((group) => group.sizeClasses),
		frameSize: groups.reduce((sum, group) => sum + group.frameSize, 0),
		respondents: groups.reduce((sum, group) => sum + group.respondents, 0),
		step,
	};
}
