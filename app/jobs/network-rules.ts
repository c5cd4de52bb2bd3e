import { defaultCutOffs } from "#app/estimate/steadiness.ts";
import { defaultRules } from "#app/protect/rules.ts";
import type { ReleaseRules } from "#app/release/draft.ts";

/** What a network starts with: who counts as too few, as dominating, and what is steady. Coordinators change it. */
export const networkRules: ReleaseRules = {
	minimumOwners: defaultRules.minimumOwners,
	dominancePercent: defaultRules.dominancePercent,
	largest: defaultRules.largest ?? null,
	publicFactor: defaultRules.publicFactor ?? null,
	steadyCv: defaultCutOffs.steady,
	careCv: defaultCutOffs.care,
	steadyDays: defaultCutOffs.steadyDays,
	careDays: defaultCutOffs.careDays,
};
