import type { Disposition } from "#app/collect/frame-list.server.ts";

/**
 * What became of the units asked, as AAPOR's Standard Definitions sort them. Counts of operations, or sums of weights such
 * as bearing trees. `unknown` are those of which nobody knows whether they belong to the survey.
 */
export type Outcomes = {
	complete: number;
	partial: number;
	/** Refused, or broke off. */
	refused: number;
	/** Known to belong to the survey and never reached. */
	notContacted: number;
	/** Known to belong, reached, and without answer for another reason. */
	otherwise: number;
	unknown: number;
	notEligible: number;
};

export const rateKeys = ["rr1", "rr2", "rr3", "rr4", "rr5", "rr6"] as const;
/**
 * Fractions from 0 to 1; null where a rate's base is empty. `rr1`, `rr3`, `rr5` count complete answers, `rr2`, `rr4`, `rr6`
 * partial ones too. The first two take every unit of unknown eligibility for eligible, the last two none; between them
 * stand those that take the share `eligibleShare`, which must be told with its basis wherever they are shown.
 */
export type ResponseRates = Record<(typeof rateKeys)[number] | "eligibleShare", number | null>;

const noOutcomes: Outcomes = Object.freeze({
	complete: 0,
	partial: 0,
	refused: 0,
	notContacted: 0,
	otherwise: 0,
	unknown: 0,
	notEligible: 0,
});

/**
 * Response rates RR1 to RR6.
 * @param eligibleShare of the units of unknown eligibility; unless given, that of the units whose eligibility is known
 *   (proportional allocation).
 * @throws {RangeError} when an outcome is negative or not finite, or the share leaves 0 to 1.
 * Source: AAPOR, Standard Definitions, as restated in other documentation; formulas and worked numbers of the reference
 * set's response-rates.md.
 */
export function responseRates(outcomes: Outcomes, eligibleShare?: number): ResponseRates {
	requireOutcomes(outcomes, eligibleShare);
	const { complete, partial, refused, notContacted, otherwise, unknown, notEligible } = outcomes;
	const eligible = complete + partial + refused + notContacted + otherwise;
	const share = eligibleShare ?? quotient(eligible, eligible + notEligible);
	// Without units of unknown eligibility their share does not matter, though nothing be known to take it from.
	const supposed = unknown === 0 ? 0 : share === null ? null : share * unknown;
	const rates = (answered: number) => [
		quotient(answered, eligible + unknown),
		supposed === null ? null : quotient(answered, eligible + supposed),
		quotient(answered, eligible),
	];
	const [rr1 = null, rr3 = null, rr5 = null] = rates(complete);
	const [rr2 = null, rr4 = null, rr6 = null] = rates(complete + partial);
	return { rr1, rr2, rr3, rr4, rr5, rr6, eligibleShare: share };
}

/**
 * Where each disposition of a frame counts. The frame is a list: an operation that was never reached, or whose mail came
 * back, has given no sign that it still grows the crop; one that was spoken to has. Answers begun and not sent in are no
 * answer, so that they count with those who broke off.
 */
export const outcomeOf: Record<Disposition, keyof Outcomes> = {
	complete: "complete",
	partial: "refused",
	refused: "refused",
	reached: "otherwise",
	not_reached: "unknown",
	undeliverable: "unknown",
	not_eligible: "notEligible",
};

/** Operations of one part of the frame that share a disposition, with the bearing trees the directory knew at opening. */
export type DispositionCount = { disposition: Disposition; operations: number; bearingTrees: number };

/** Rates of one part of a frame: a state, a stratum, the whole. */
export type FrameResponse = {
	counted: ResponseRates;
	/** Weighted by bearing trees. */
	weighted: ResponseRates;
	/** Bearing trees of those who answered, over all but those known not to belong; null where there are none. */
	treesCovered: number | null;
};

/**
 * Response rates of one part of a frame, counted by operation and weighted by bearing trees.
 * @param counts one row a disposition or more; they add.
 */
export function frameResponse(counts: Iterable<DispositionCount>): FrameResponse {
	const [operations, trees] = [{ ...noOutcomes }, { ...noOutcomes }];
	for (const count of counts) {
		const outcome = outcomeOf[count.disposition];
		operations[outcome] += count.operations;
		trees[outcome] += count.bearingTrees;
	}
	const weighted = responseRates(trees);
	return { counted: responseRates(operations), weighted, treesCovered: weighted.rr1 };
}

/** What was sent in to one question, in counts of responses. `notAsked` are those whose earlier answers passed it by. */
export type ItemAnswers = { given: number; dontKnow: number; refused: number; blank: number; notAsked: number };

/**
 * Item response rate: of the responses that were asked a question, the share that gave it a value. A zero is a value;
 * "don't know" is none. Answers set aside in review were given.
 * @returns null where nobody was asked.
 * @throws {RangeError} when a count is negative or not finite.
 */
export function itemResponseRate({ given, dontKnow, refused, blank, notAsked }: ItemAnswers): number | null {
	requireNatural([given, dontKnow, refused, blank, notAsked]);
	return quotient(given, given + dontKnow + refused + blank);
}

function quotient(part: number, whole: number): number | null {
	return whole === 0 ? null : part / whole;
}

function requireOutcomes(outcomes: Outcomes, eligibleShare: number | undefined): void {
	requireNatural(Object.values(outcomes));
	if (eligibleShare !== undefined && !(eligibleShare >= 0 && eligibleShare <= 1)) {
		throw new RangeError(`${eligibleShare} is not a share`);
	}
}

function requireNatural(counts: number[]): void {
	const wrong = counts.find((count) => !(count >= 0 && Number.isFinite(count)));
	if (wrong !== undefined) throw new RangeError(`a response rate cannot be had from a count of ${wrong}`);
}
