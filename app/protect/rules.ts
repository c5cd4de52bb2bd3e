import type { OwnerShare, TableCell } from "./table.ts";

/** What the public may see of a cell. A withheld cell has one word for every reason; `no_growers` is a published zero. */
export type CellStatus = "shown" | "withheld" | "no_growers";

/**
 * Why a cell is withheld for its own sake. Only the desk sees it. `uniform`: everybody gave one answer to a sensitive
 * question; `revision`: showing it beside an earlier release would tell of too few; `other_survey`: a release of another
 * survey of the season withholds the very same.
 */
export type OwnReason = "too_few_owners" | "dominated" | "uniform" | "revision" | "other_survey";

/** The network's settings; frozen with each release. */
export interface ProtectionRules {
	/** k: a cell with fewer owners is withheld. Never below 3, as two owners can always work each other out. */
	minimumOwners: number;
	/** p of the p% rule: withheld when total minus the two largest is under p% of the largest. */
	dominancePercent: number;
	/** The (n, k) rule: withheld when the `owners` largest have more than `percent` of the total. Left out or null: not used. */
	largest?: { owners: number; percent: number } | null;
	/**
	 * f: outsiders are taken to know, from what anybody can see of an orchard, that a withheld amount lies within
	 * [value / f, f x value]. Left out or null: they are not.
	 */
	publicFactor?: number | null;
}

export const defaultRules: ProtectionRules = {
	minimumOwners: 5,
	dominancePercent: 10,
	largest: null,
	publicFactor: null,
};

const SMALLEST_MINIMUM = 3;

/**
 * Settings as they may be used.
 * @throws {RangeError} for a minimum under 3 owners or not whole, a percentage outside (0, 100], an (n, k) rule that counts
 *   as many owners as suffice, or a public factor that leaves less room than the other rules ask for.
 */
export function checkRules(rules: ProtectionRules): ProtectionRules {
	const { minimumOwners, dominancePercent, largest, publicFactor } = rules;
	if (!Number.isInteger(minimumOwners) || minimumOwners < SMALLEST_MINIMUM) {
		throw new RangeError(`minimumOwners must be a whole number of at least ${SMALLEST_MINIMUM}`);
	}
	if (!(dominancePercent > 0 && dominancePercent <= 100)) {
		throw new RangeError("dominancePercent must be above 0 and at most 100");
	}
	if (largest) {
		const { owners, percent } = largest;
		if (!Number.isInteger(owners) || owners < 1 || owners >= minimumOwners) {
			throw new RangeError("largest.owners must be a whole number from 1 to below minimumOwners");
		}
		if (!(percent > 0 && percent < 100)) throw new RangeError("largest.percent must be above 0 and below 100");
	}
	// No cell asks for more than p% of its total, or than the (n, k) rule's 100/k of it.
	const widest = Math.max(1 + dominancePercent / 100, largest ? 100 / largest.percent : 1);
	if (publicFactor != null && !(publicFactor > widest)) {
		throw new RangeError(`publicFactor must be above ${widest}, or no cell could be kept as the other rules ask`);
	}
	return rules;
}

/**
 * Every reason for which a cell must be withheld for its own sake; empty when it may be shown.
 * Owners are counted, not operations; those who allowed publication count too. The rules of dominance are tried on each
 * quantity, since the cell is shown or withheld as a whole; so is the measure that the fewest owners answered. A cell
 * without owners is a published zero and has no reason. A quantity that is 0 while owners answered (all was lost) is not
 * dominated: nobody's share can be worked out of it beyond what the count of owners already allows.
 */
export function ownReasons(cell: TableCell, rules: ProtectionRules): OwnReason[] {
	checkRules(rules);
	if (cell.owners === 0) return [];
	const reasons: OwnReason[] = [];
	if (Math.min(cell.owners, cell.fewestOwners ?? cell.owners) < rules.minimumOwners) reasons.push("too_few_owners");
	if (Object.values(cell.quantities).some((share) => shortfall(share, rules) > 0)) reasons.push("dominated");
	if (cell.uniform) reasons.push("uniform");
	return reasons;
}

/**
 * By how much more the total would have to be uncertain for no rule of dominance to be broken; 0 when none is. In units of
 * the quantity; at once the protection level of a dominated cell.
 * Source: Handbook on Statistical Disclosure Control (Hundepool et al.), section 4.2: sensitivity rules and upper
 * protection levels (p%: p/100 x1 - (X - x1 - x2); (n, k): 100/k (x1 + ... + xn) - X), strictly above 0.
 */
export function shortfall(share: OwnerShare, rules: ProtectionRules): number {
	return Math.max(remainderShortfall(share, rules), largestShortfall(share, rules));
}

/**
 * The p% rule. Who allowed publication is not the one to be guarded but is still the one who could subtract: x1 is the
 * largest owner without a waiver, x2 the largest other one (the same section, Waivers and Holdings).
 */
function remainderShortfall(share: OwnerShare, { dominancePercent }: ProtectionRules): number {
	const { first, other } = share.guarded ?? { first: share.top1, other: share.top2 };
	return real((dominancePercent / 100) * first - (share.total - first - other), share.total);
}

/** The (n, k) rule over the largest owners without a waiver: what the others agreed to is no reason. */
function largestShortfall(share: OwnerShare, { largest }: ProtectionRules): number {
	if (!largest) return 0;
	if (share.largest === undefined)
		throw new RangeError("a share has no sum of its largest owners, which the rules ask for");
	return real((100 / largest.percent) * share.largest - share.total, share.total);
}

/** Sums of many doubles differ in their last digits; such a difference is no domination. */
function real(short: number, total: number): number {
	return short > 1e-9 * total ? short : 0;
}
