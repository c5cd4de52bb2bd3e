import type { FormDefinition, Measure } from "#app/collect/form.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { isOdd, logSpreadOf, robustScore, type LogSpread } from "./like-operations.ts";
import type { Odd, OddTold } from "./odd-answers.ts";
import { findOddRatios, ratioEffects, type RatioFindings } from "./ratio-to-last.ts";
import { unitSlip } from "./unit-slip.ts";

/** What one operation told of one quantity and crop, its plantings summed, this season and last. */
export type ToldQuantity = {
	operationId: string;
	measureKey: string;
	cropKey: string;
	stateFips: string;
	districtKey: string | null;
	now: number;
	last: number | null;
	/** Plants in bearing, by which pounds are made comparable; null where the form does not ask for them. */
	plants: number | null;
};

/** The measures that are one question's own number added up: only these can be held against other operations' by size. */
export function quantitiesOf({ measures }: Pick<FormDefinition, "measures">): { measure: Measure; question: string }[] {
	const sized = new Set(["lb", "trees", "acres", "row_feet", "count"]);
	const taken = new Set<string>();
	return measures.flatMap((measure) => {
		const { numerator, denominator } = measure;
		if (!sized.has(measure.unit) || !("terms" in numerator) || numerator.terms.length !== 1) return [];
		if (denominator !== null && !("one" in denominator)) return [];
		const [term] = numerator.terms;
		if (!term || !("question" in term) || term.share !== undefined || taken.has(term.question)) return [];
		taken.add(term.question);
		return [{ measure, question: term.question }];
	});
}

/** How the operations of a crop told one quantity, for holding any one of them against the others. */
export type Neighbors = {
	ratios: RatioFindings;
	/** The usual ratio of this season to last, whether or not there are enough pairs to test by. */
	usualRatio: number | null;
	/** Spread of the quantity by plant where plants are known, in each district and over the state. */
	byDistrict: Map<string, LogSpread | null>;
	ofState: LogSpread | null;
};

/** @param told of one measure, crop and state. */
export function neighborsOf(told: readonly ToldQuantity[]): Neighbors {
	const pairs = told.map(({ operationId, last, now }) => ({ key: operationId, last, now }));
	const districts = groupBy(
		told.filter(({ districtKey }) => districtKey !== null),
		({ districtKey }) => districtKey!,
	);
	return {
		ratios: findOddRatios(pairs),
		usualRatio: ratioEffects(pairs).centre,
		byDistrict: new Map([...districts].map(([key, rows]) => [key, logSpreadOf(rows.map(sizeOf))])),
		ofState: logSpreadOf(told.map(sizeOf)),
	};
}

/** By plant where plants are known: a large orchard is not odd for being large. */
export function sizeOf({ measureKey, now, plants }: ToldQuantity): number | null {
	if (measureKey === "base.bearing_trees" || plants === null) return now;
	return plants > 0 ? now / plants : null;
}

/**
 * How far a ratio must lie from the usual one to be worth a call: a third more, or as much less. Where nearly all change
 * alike, the bounds alone would ask large operations about a tenth.
 */
const leastDistance = 1 / 3;

/**
 * Why one operation's quantity is odd beside its own last season and beside like operations; a slip of unit says more than
 * the other two, so it stands alone.
 * @param bushelLb pounds in the crop's bushel, null where it has none or the quantity is no mass.
 */
export function oddnessOf(
	told: ToldQuantity,
	neighbors: Neighbors,
	bushelLb: number | null,
): Pick<Odd, "checkKind" | "told">[] {
	const slip = slipOf(told, neighbors, bushelLb);
	if (slip) return [{ checkKind: "unit_slip", told: slip }];
	const found: Pick<Odd, "checkKind" | "told">[] = [];
	const flagged = neighbors.ratios.flagged.find(({ key }) => key === told.operationId);
	if (
		flagged &&
		Math.abs(flagged.distance) >= leastDistance &&
		told.last !== null &&
		neighbors.ratios.centre !== null
	) {
		const { ratio } = flagged;
		const { now, last } = told;
		found.push({
			checkKind: "ratio_to_last",
			told: { why: "ratio", now, last, ratio, centre: neighbors.ratios.centre },
		});
	}
	const like = likeOf(told, neighbors);
	const score = robustScore(sizeOf(told), like?.spread ?? null);
	if (like && score !== null && isOdd(score)) {
		const { spread, area } = like;
		const perPlant = sizeOf(told) !== told.now;
		const value = sizeOf(told)!;
		const median = Math.exp(spread.median);
		found.push({
			checkKind: "like_operations",
			told: { why: "unlike", value, median, used: spread.used, score, perPlant, area },
		});
	}
	return found;
}

/** The district where enough of it told, else the state. */
export function likeOf(
	{ districtKey }: ToldQuantity,
	{ byDistrict, ofState }: Neighbors,
): { spread: LogSpread; area: "district" | "state" } | null {
	const spread = districtKey === null ? null : (byDistrict.get(districtKey) ?? null);
	if (spread) return { spread, area: "district" };
	return ofState && { spread: ofState, area: "state" };
}

function slipOf(told: ToldQuantity, neighbors: Neighbors, bushelLb: number | null): OddTold | null {
	if (bushelLb === null || !(told.now > 0)) return null;
	const { now, last } = told;
	if (last !== null && last > 0 && neighbors.usualRatio !== null) {
		const usual = last * neighbors.usualRatio;
		return unitSlip(now / usual, bushelLb) === "now"
			? { why: "unit", now, usual, size: bushelLb, against: "last" }
			: null;
	}
	const [size, like] = [sizeOf(told), likeOf(told, neighbors)];
	if (size === null || !(size > 0) || !like) return null;
	const median = Math.exp(like.spread.median);
	// Without its own last season a slip is only told from an odd answer where it would be odd at all.
	if (!isOdd(robustScore(size, like.spread)) || unitSlip(size / median, bushelLb) !== "now") return null;
	return { why: "unit", now, usual: (median * now) / size, size: bushelLb, against: "like" };
}
