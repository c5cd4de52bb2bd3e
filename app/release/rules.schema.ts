import { z } from "zod";
import { numberField as number, optionalField as optional } from "#app/lib/number-field.ts";
import type { ReleaseRules } from "./draft.ts";

/** The settings as the page sends them: percents are typed as percents. */
export const RulesForm = z
	.object({
		minimumOwners: number(3, 50, true),
		dominancePercent: number(1, 100),
		largestOwners: optional(number(1, 49, true)),
		largestPercent: optional(number(1, 99)),
		publicFactor: optional(number(1.01, 100)),
		steadyPercent: number(1, 100),
		carePercent: number(1, 200),
		steadyDays: number(0.5, 60),
		careDays: number(0.5, 120),
	})
	.superRefine((form, check) => {
		const refuse = (field: keyof typeof form, message: string) =>
			check.addIssue({ code: "custom", path: [field], message });
		if (form.largestOwners === undefined && form.largestPercent !== undefined) refuse("largestOwners", "empty");
		if (form.largestPercent === undefined && form.largestOwners !== undefined) refuse("largestPercent", "empty");
		if (form.largestOwners !== undefined && form.largestOwners >= form.minimumOwners)
			refuse("largestOwners", "rules_largest_owners");
		// No cell asks for more room than p% of its total, or than the (n, k) rule's 100/k of it.
		const widest = Math.max(1 + form.dominancePercent / 100, form.largestPercent ? 100 / form.largestPercent : 1);
		if (form.publicFactor !== undefined && form.publicFactor <= widest) refuse("publicFactor", "rules_public_factor");
		if (form.carePercent <= form.steadyPercent) refuse("carePercent", "rules_care");
		if (form.careDays <= form.steadyDays) refuse("careDays", "rules_care");
	});
export type RulesForm = z.infer<typeof RulesForm>;

export function rulesOf(form: RulesForm): ReleaseRules {
	const { largestOwners: owners, largestPercent: percent } = form;
	return {
		minimumOwners: form.minimumOwners,
		dominancePercent: form.dominancePercent,
		largest: owners === undefined || percent === undefined ? null : { owners, percent },
		publicFactor: form.publicFactor ?? null,
		steadyCv: form.steadyPercent / 100,
		careCv: form.carePercent / 100,
		steadyDays: form.steadyDays,
		careDays: form.careDays,
	};
}

const percent = (part: number) => Number((part * 100).toFixed(6));

/** What stands in the boxes before anybody types. */
export function formOf(rules: ReleaseRules): Record<keyof RulesForm, number | null> {
	return {
		minimumOwners: rules.minimumOwners,
		dominancePercent: rules.dominancePercent,
		largestOwners: rules.largest?.owners ?? null,
		largestPercent: rules.largest?.percent ?? null,
		publicFactor: rules.publicFactor,
		steadyPercent: percent(rules.steadyCv),
		carePercent: percent(rules.careCv),
		steadyDays: rules.steadyDays,
		careDays: rules.careDays,
	};
}
