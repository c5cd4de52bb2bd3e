import type { ReleaseRules } from "./draft.ts";
import { formOf, type RuleName, ruleNames } from "./rules.schema.ts";

/** One setting that a change moved; null is a box that is left empty. */
export type RuleMove = { name: RuleName; from: number | null; to: number | null };

/** Which settings differ, in the page's order. */
export function movesBetween(before: ReleaseRules, after: ReleaseRules): RuleMove[] {
	const [from, to] = [formOf(before), formOf(after)];
	return ruleNames.flatMap((name) => (from[name] === to[name] ? [] : [{ name, from: from[name], to: to[name] }]));
}

/**
 * Of these moves, those after which more is published than before: a smaller crowd, less room around the largest, a rule that
 * is left off, a passer-by who is taken to see less, or a figure that was too rough. What counts as steady changes words only.
 */
export function looseningOf(moves: RuleMove[]): RuleMove[] {
	return moves.filter(({ name, from, to }) => loosens[name](from ?? Infinity, to ?? Infinity));
}

const lower = (from: number, to: number) => to < from;
const higher = (from: number, to: number) => to > from;

const loosens: Record<RuleName, (from: number, to: number) => boolean> = {
	minimumOwners: lower,
	dominancePercent: lower,
	// Empty is no rule at all, and the box beside it says so; fewer of the largest have less between them.
	largestOwners: (from, to) => to < from && from !== Infinity,
	largestPercent: higher,
	publicFactor: higher,
	steadyPercent: () => false,
	carePercent: higher,
	steadyDays: () => false,
	careDays: higher,
};

/** Names exactly what loosens, so that agreeing to one change agrees to no other. */
export const agreementTo = (loosening: RuleMove[]) => loosening.map(({ name, to }) => `${name}=${to}`).join(",");

export type RulesRow = { networkRulesId: number; rules: ReleaseRules; setBy: string; setAt: Date };
export type RulesChange = Omit<RulesRow, "rules"> & { moves: RuleMove[] };

/**
 * What each change moved.
 * @param rows the latest first. @param start what held before the last of them.
 */
export function changesOf(rows: RulesRow[], start: ReleaseRules): RulesChange[] {
	return rows.map(({ rules, ...told }, index) => ({
		...told,
		moves: movesBetween(rows[index + 1]?.rules ?? start, rules),
	}));
}
