import type { Sample } from "#app/estimate/calibration/calibration.ts";
import { type BlockCalibration, calibrateBlock } from "#app/estimate/calibration/calibrate-block.ts";
import type { Weighting } from "#app/estimate/calibration/weighting.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { joinStrata, type JoinedStratum, respondentsByStratum, type StrataFrame } from "#app/estimate/strata.ts";
import type { FrameCell, FrameStratum, ToldAnswer } from "#app/tally/tally.ts";

/** What the weights of one measure's answers about one crop rest on. */
export type WeighingInput = {
	weighting: Weighting;
	/** Strata of the crop, of every state seen. */
	frame: readonly FrameStratum[];
	/** The same frame by county and stratum. */
	cells: readonly FrameCell[];
	/** Each operation's, set-aside ones left out. */
	answers: readonly ToldAnswer[];
	districtOf: ReadonlyMap<string, string | null>;
};

/** One measure's answers about one crop with what each stands for. Lists are in the order of the answers. */
export type WeighedAnswers = {
	answers: readonly ToldAnswer[];
	strata: StrataFrame;
	/** Place in `strata.strata` of each answer. */
	stratumOf: number[];
	/** N_h / n_h of each answer's stratum. */
	designWeights: number[];
	weights: number[];
	blocks: WeighedBlock[];
	/** Which block each answer is in, and its place there; null where everybody of its stratum answered. */
	blockOf: ({ block: number; member: number } | null)[];
};

/** The strata of one state, or of some that share one, in which not everybody answered. */
export type WeighedBlock = BlockCalibration & {
	sample: Sample;
	/** Places in the lists of the block's answers, in the order of its sample. */
	members: number[];
	/** Places in `strata.strata` of the sample's strata. */
	places: number[];
};

/**
 * Weights of answers by a survey's choice. Every state is calibrated by itself, so that one with few answers keeps its
 * design weights without touching others, and an associate of one state sees the figures that the network will; states
 * that share a joined stratum are calibrated together. Where everybody of a stratum answered, each goes on counting once.
 * @throws {RangeError} as `joinStrata`.
 */
export function weighAnswers(input: WeighingInput): WeighedAnswers {
	const { frame, answers } = input;
	const strata = joinStrata(frame, respondentsByStratum(answers.map(({ stratumKey }) => ({ stratumKey, n: 1 }))));
	const placeOf = new Map(strata.strata.flatMap(({ stratumKeys }, at) => stratumKeys.map((key) => [key, at] as const)));
	const stratumOf = answers.map(({ stratumKey }) => placeOf.get(stratumKey)!);
	const designWeights = stratumOf.map((at) => strata.strata[at]!.frameSize / strata.strata[at]!.respondents);
	const weights = [...designWeights];
	const membersOf = groupBy(
		answers.map((_, i) => i),
		(i) => stratumOf[i]!,
	);
	const blocks = statesTogether(strata, frame).map(({ stateFips, places }): WeighedBlock => {
		const open = places.filter((at) => isOpen(strata.strata[at]!));
		const members = open.flatMap((at) => membersOf.get(at) ?? []);
		const own = open.map((at) => strata.strata[at]!);
		const keys = new Set(own.flatMap(({ stratumKeys }) => stratumKeys));
		const sample: Sample = {
			operations: members.map((i) => ({ stratum: open.indexOf(stratumOf[i]!), weight: designWeights[i]! })),
			samplingFractions: own.map(({ frameSize, respondents }) => respondents / frameSize),
		};
		const calibrated = calibrateBlock(input.weighting, {
			stateFips,
			strata: own,
			cells: input.cells.filter(({ stratumKey }) => keys.has(stratumKey)),
			answers: members.map((i) => answers[i]!),
			sample,
			districtOf: input.districtOf,
		});
		for (const [k, i] of members.entries()) weights[i] = calibrated.calibration.weights[k]!;
		return { ...calibrated, sample, members, places: open };
	});
	const blockOf: WeighedAnswers["blockOf"] = answers.map(() => null);
	for (const [block, { members }] of blocks.entries())
		for (const [member, i] of members.entries()) blockOf[i] = { block, member };
	return { answers, strata, stratumOf, designWeights, weights, blocks, blockOf };
}

/** Where everybody answered, nothing is left to be weighed. */
function isOpen({ frameSize, respondents }: JoinedStratum): boolean {
	return respondents > 0 && respondents < frameSize;
}

/** Strata by state; those of states that were joined, together. */
function statesTogether(
	{ strata }: StrataFrame,
	frame: readonly FrameStratum[],
): { stateFips: string[]; places: number[] }[] {
	const stateOf = new Map(frame.map(({ stratumKey, stateFips }) => [stratumKey, stateFips]));
	let blocks: { stateFips: string[]; places: number[] }[] = [];
	for (const [at, { stratumKeys }] of strata.entries()) {
		const own = { stateFips: [...new Set(stratumKeys.map((key) => stateOf.get(key)!))], places: [at] };
		const [touched, others] = [true, false].map((wanted) =>
			blocks.filter(({ stateFips }) => stateFips.some((state) => own.stateFips.includes(state)) === wanted),
		);
		const all = [...touched!, own];
		blocks = [
			...others!,
			{
				stateFips: [...new Set(all.flatMap(({ stateFips }) => stateFips))].toSorted(),
				places: all.flatMap(({ places }) => places),
			},
		];
	}
	return blocks;
}
