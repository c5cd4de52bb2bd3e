import { CalibrationError, type Calibration, type Sample } from "#app/estimate/calibration/calibration.ts";
import { groupDistricts } from "#app/estimate/calibration/districts.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import { indicatorsOf, type Margin, postStratify, rake } from "#app/estimate/calibration/raking.ts";
import type { Auxiliary } from "#app/estimate/calibration/regression.ts";
import {
	calibrationLimits,
	type CalibrationNote,
	type Fallback,
	type KnownTotal,
	type Weighting,
} from "#app/estimate/calibration/weighting.ts";
import type { JoinedStratum } from "#app/estimate/strata.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { FrameCell, ToldAnswer } from "#app/tally/tally.ts";

/** The strata of a block in which not everybody answered, their frame and their answers. */
export type BlockPart = {
	stateFips: string[];
	strata: readonly JoinedStratum[];
	cells: readonly FrameCell[];
	/** In the order of the sample. */
	answers: readonly ToldAnswer[];
	sample: Sample;
	districtOf: ReadonlyMap<string, string | null>;
};

export type BlockCalibration = { calibration: Calibration; note: CalibrationNote };

/** What the weights are to meet, before they are looked for. */
type Aim = { totals: KnownTotal[]; takenTogether: string[]; calibrate: () => Calibration };

/** Weights of one block by a survey's choice, or its design weights with the reason why they were kept. */
export function calibrateBlock(weighting: Weighting, part: BlockPart): BlockCalibration {
	if (weighting === "design" || part.answers.length === 0) return keepDesign(part, noAim, null);
	const aim = aims[weighting](part);
	const { fewestAnswers, fewestPerTotal } = calibrationLimits;
	if (part.answers.length < Math.max(fewestAnswers, fewestPerTotal * aim.totals.length))
		return keepDesign(part, aim, "too_few");
	// With no trees at all on the frame there is nothing that the answers could be told apart by.
	if (aim.totals.some(({ of, total }) => of === "bearing_trees" && !(total > 0)))
		return keepDesign(part, aim, "zero_total");
	try {
		return judge(part, aim, aim.calibrate());
	} catch (error) {
		if (error instanceof CalibrationError) return keepDesign(part, aim, error.problem);
		throw error;
	}
}

/** Takes weights only where none is far from what it was: a few answers must not stand for everybody. */
function judge(part: BlockPart, aim: Aim, calibration: Calibration): BlockCalibration {
	let [smallest, largest] = [Infinity, -Infinity];
	for (const factor of calibration.factors) {
		smallest = Math.min(smallest, factor);
		largest = Math.max(largest, factor);
	}
	const { lowestFactor, highestFactor } = calibrationLimits;
	if (!(smallest >= lowestFactor && largest <= highestFactor)) return keepDesign(part, aim, "extreme_weights");
	const { sweeps } = calibration;
	return { calibration, note: { ...noteOf(part, aim), sweeps, smallest, largest, fallback: null } };
}

const noAim = { totals: [], takenTogether: [] };

function keepDesign(
	part: BlockPart,
	aim: Pick<Aim, "totals" | "takenTogether">,
	fallback: Fallback | null,
): BlockCalibration {
	const weights = part.sample.operations.map(({ weight }) => weight);
	const calibration: Calibration = {
		weights,
		factors: weights.map(() => 1),
		unexplained: (values) => [...values],
		sweeps: 0,
	};
	return { calibration, note: { ...noteOf(part, aim), sweeps: null, smallest: 1, largest: 1, fallback } };
}

function noteOf({ stateFips, answers }: BlockPart, { totals, takenTogether }: Pick<Aim, "totals" | "takenTogether">) {
	return { stateFips, respondents: answers.length, totals, takenTogether };
}

const aims: Record<Exclude<Weighting, "design">, (part: BlockPart) => Aim> = {
	post_stratified: (part) => {
		const { margin, takenTogether } = districtMargin(part);
		return {
			totals: totalsOf("district", margin, part),
			takenTogether,
			calibrate: () => postStratify(part.sample, margin),
		};
	},
	raked: (part) => {
		const { margin, takenTogether } = districtMargin(part);
		const strata = stratumMargin(part);
		return {
			totals: [...totalsOf("district", margin, part), ...totalsOf("stratum", strata, part)],
			takenTogether,
			calibrate: () => rake(part.sample, [margin, strata]),
		};
	},
	linear: (part) => {
		const strata = stratumMargin(part);
		const total = part.cells.reduce((sum, { bearingTrees }) => sum + bearingTrees, 0);
		const trees: Auxiliary = {
			name: "bearing trees",
			values: part.answers.map(({ bearingTrees }) => bearingTrees),
			total,
		};
		return {
			totals: [
				...totalsOf("stratum", strata, part),
				{ of: "bearing_trees", group: part.stateFips.join("+"), total, byDesign: weighted(part, trees.values) },
			],
			takenTogether: [],
			calibrate: () => calibrateLinear(part.sample, [...indicatorsOf(strata), trees]),
		};
	},
};

function districtMargin(part: BlockPart): { margin: Margin; takenTogether: string[] } {
	const answered = groupBy(part.answers, ({ countyFips }) => countyFips);
	const ofFrame = groupBy(part.cells, ({ countyFips }) => countyFips);
	const counties = [...new Set([...ofFrame.keys(), ...answered.keys()])].map((countyFips) => ({
		countyFips,
		operations: (ofFrame.get(countyFips) ?? []).reduce((sum, { operations }) => sum + operations, 0),
		respondents: answered.get(countyFips)?.length ?? 0,
	}));
	const { groupOf, takenTogether } = groupDistricts(counties, part.districtOf);
	const totals = new Map<string, number>();
	for (const { countyFips, operations } of counties) {
		const group = groupOf.get(countyFips)!;
		totals.set(group, (totals.get(group) ?? 0) + operations);
	}
	const groups = part.answers.map(({ countyFips }) => groupOf.get(countyFips)!);
	return { margin: { name: "district", groups, totals }, takenTogether };
}

function stratumMargin({ strata, sample }: BlockPart): Margin {
	const names = strata.map(({ stratumKeys }) => stratumKeys.join("+"));
	return {
		name: "stratum",
		groups: sample.operations.map(({ stratum }) => names[stratum]!),
		totals: new Map(strata.map(({ frameSize }, at) => [names[at]!, frameSize])),
	};
}

function totalsOf(of: KnownTotal["of"], margin: Margin, part: BlockPart): KnownTotal[] {
	return indicatorsOf(margin).map(({ values, total }, at) => ({
		of,
		group: [...margin.totals.keys()][at]!,
		total,
		byDesign: weighted(part, values),
	}));
}

function weighted({ sample }: BlockPart, values: readonly number[]): number {
	return sample.operations.reduce((sum, { weight }, i) => sum + weight * values[i]!, 0);
}
