import type { TableCell } from "./table.ts";

/** What the public may see of a cell. A withheld cell has one word for every reason; `no_growers` is a published zero. */
export type CellStatus = "shown" | "withheld" | "no_growers";

/** Why a cell is withheld for its own sake. Only the desk sees it. */
export type OwnReason = "too_few_owners" | "dominated";

/** The network's settings; frozen with each release. */
export interface ProtectionRules {
	/** k: a cell with fewer owners is withheld. Never below 3, as two owners can always work each other out. */
	minimumOwners: number;
	/** p of the p% rule: withheld when total minus the two largest is under p% of the largest. */
	dominancePercent: number;
}

export const defaultRules: ProtectionRules = { minimumOwners: 5, dominancePercent: 10 };

const SMALLEST_MINIMUM = 3;

/**
 * Settings as they may be used.
 * @throws {RangeError} for a minimum under 3 owners or not whole, or a percentage outside (0, 100].
 */
export function checkRules(rules: ProtectionRules): ProtectionRules {
	if (!Number.isInteger(rules.minimumOwners) || rules.minimumOwners < SMALLEST_MINIMUM) {
		throw new RangeError(`minimumOwners must be a whole number of at least ${SMALLEST_MINIMUM}`);
	}
	if (!(rules.dominancePercent > 0 && rules.dominancePercent <= 100)) {
		throw new RangeError("dominancePercent must be above 0 and at most 100");
	}
	return rules;
}

/**
 * Every reason for which a cell must be withheld for its own sake; empty when it may be shown.
 * Owners are counted, not operations. The p% rule is tried on each quantity, since the cell is shown or withheld as a
 * whole; so is the measure that the fewest owners answered. A cell without owners is a published zero and has no reason. A quantity that is 0 while owners answered (all
 * was lost) is not dominated: nobody's share can be worked out of it beyond what the count of owners already allows.
 * Source: Handbook on Statistical Disclosure Control (Hundepool et al.), section 4.2: X - x1 - x2 < p/100 x1, strictly.
 */
export function ownReasons(cell: TableCell, rules: ProtectionRules): OwnReason[] {
	checkRules(rules);
	if (cell.owners === 0) return [];
	const reasons: OwnReason[] = [];
	if (Math.min(cell.owners, cell.fewestOwners ?? cell.owners) < rules.minimumOwners) reasons.push("too_few_owners");
	if (Object.values(cell.quantities).some((share) => shortfall(share, rules) > 0)) reasons.push("dominated");
	return reasons;
}

/** How far the remainder falls short of p% of the largest: above 0 means dominated. In units of the quantity. */
export function shortfall(share: { total: number; top1: number; top2: number }, rules: ProtectionRules): number {
	const wanted = (rules.dominancePercent / 100) * share.top1;
	const short = wanted - (share.total - share.top1 - share.top2);
	// Sums of many doubles differ in their last digits; such a difference is no domination.
	return short > 1e-9 * share.total ? short : 0;
}
