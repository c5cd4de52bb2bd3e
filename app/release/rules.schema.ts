import { z } from "zod";
import { numberField as number, optionalField as optional } from "#app/lib/number-field.ts";
import type { ReleaseRules } from "./draft.ts";

/** Between which values each setting lies; those that count are whole. The same stand beside the boxes. */
export const ruleBounds = {
	minimumOwners: { least: 3, most: 50, whole: true },
	dominancePercent: { least: 1, most: 100, whole: false },
	largestOwners: { least: 1, most: 49, whole: true },
	largestPercent: { least: 1, most: 99, whole: false },
	publicFactor: { least: 1.01, most: 100, whole: false },
	steadyPercent: { least: 1, most: 100, whole: false },
	carePercent: { least: 1, most: 200, whole: false },
	steadyDays: { least: 0.5, most: 60, whole: false },
	careDays: { least: 0.5, most: 120, whole: false },
} as const;
export type RuleName = keyof typeof ruleBounds;
export const ruleNames = Object.keys(ruleBounds) as RuleName[];

const within = ({ least, most, whole }: (typeof ruleBounds)[RuleName]) => number(least, most, whole);

/** The settings as the page sends them: percents are typed as percents. */
export const RulesForm = z
	.object({
		minimumOwners: within(ruleBounds.minimumOwners),
		dominancePercent: within(ruleBounds.dominancePercent),
		largestOwners: optional(within(ruleBounds.largestOwners)),
		largestPercent: optional(within(ruleBounds.largestPercent)),
		publicFactor: optional(within(ruleBounds.publicFactor)),
		steadyPercent: within(ruleBounds.steadyPercent),
		carePercent: within(ruleBounds.carePercent),
		steadyDays: within(ruleBounds.steadyDays),
		careDays: within(ruleBounds.careDays),
		/** The change that stood when the page was opened, 0 before the first. */
		basedOn: z.coerce.number().int().min(0).catch(0),
		/** What was read and agreed to that loosens, as `looseningOf` names it. */
		agreed: z.string().max(400).optional(),
	})
	.superRefine((form, check) => {
		const refuse = (field: RuleName, message: string) => check.addIssue({ code: "custom", path: [field], message });
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

/** Settings as they stand in the boxes; null is an empty one. */
export type TypedRules = Record<RuleName, number | null>;

/** What stands in the boxes before anybody types. */
export function formOf(rules: ReleaseRules): TypedRules {
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
