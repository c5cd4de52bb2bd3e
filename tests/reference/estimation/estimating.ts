import { calibratedEstimate, weightedAnswers, type DomainAnswer } from "#app/estimate/calibration/estimate.ts";
import type { Calibration, Sample } from "#app/estimate/calibration/calibration.ts";
import { designDegreesOfFreedom, type WeightedMoments } from "#app/estimate/domain.ts";
import { estimateOf, type Figure } from "#app/estimate/estimators.ts";
import type { EstimateKind } from "#app/estimate/linearize.ts";
import {
	everyone,
	one,
	seenFrom,
	type Design,
	type Domain,
	type Quantity,
} from "#tests/reference/estimation/design.ts";

/** A design with its weights, plain or calibrated: one way to ask either for a figure. */
export type Estimating = {
	design: Design;
	/** Degrees of freedom of the whole design. */
	df: number;
	figure(kind: EstimateKind, domain: Domain, y: Quantity, x?: Quantity): Figure | null;
	/** The domain's sums with their weights. */
	parts(domain: Domain, y: Quantity): WeightedMoments[];
};

/** From sums by stratum. */
export function plain(design: Design): Estimating {
	return {
		design,
		df: degreesOfFreedom(design),
		figure: (kind, domain, y, x) => estimateOf(kind, seenFrom(design, domain, y, x)),
		parts: (domain, y) => seenFrom(design, domain, y),
	};
}

/** With a calibration of the design's sample, operation by operation. */
export function calibrated(design: Design, calibration: Calibration): Estimating {
	const rows = rowsOf(design);
	const answers = (domain: Domain, y: Quantity, x: Quantity): DomainAnswer[] =>
		rows.map((row) => (domain(row) ? { y: y(row), x: x(row) } : null));
	return {
		design,
		df: degreesOfFreedom(design),
		figure: (kind, domain, y, x = one) =>
			calibratedEstimate(kind, sampleOf(design), calibration, answers(domain, y, x)),
		parts: (domain, y) => weightedAnswers(calibration, answers(domain, y, one)),
	};
}

/** The design's rows in the order of its sample. */
export function rowsOf(design: Design) {
	return design.strata.flatMap(({ rows }) => rows);
}

export function sampleOf({ strata }: Design): Sample {
	return {
		operations: strata.flatMap(({ rows, weight }, stratum) => rows.map(() => ({ stratum, weight }))),
		samplingFractions: strata.map(({ samplingFraction }) => samplingFraction),
	};
}

function degreesOfFreedom(design: Design): number {
	return designDegreesOfFreedom(seenFrom(design, everyone, one));
}
