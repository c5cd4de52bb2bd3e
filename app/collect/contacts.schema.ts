import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";
import type { Disposition } from "./frame-list.server.ts";

export const contactWays = ["telephone", "visit", "letter", "other"] as const;
export const contactOutcomes = [
	"reached",
	"message_left",
	"no_answer",
	"call_back",
	"wrong_number",
	"refused",
	"not_eligible",
] as const;

/** A contact as it is noted: how, what came of it, and when to try next. With a survey, it is about that survey. */
export const ContactForm = z
	.object({
		surveyId: z.guid().optional(),
		way: z.enum(contactWays, "choice_wrong"),
		outcome: z.enum(contactOutcomes, "choice_wrong"),
		note: z.string().trim().max(2000, "too_long").default(""),
		nextOn: z.iso.date("date_wrong").optional(),
		nextTime: z
			.string()
			.regex(/^([01]\d|2[0-3]):[0-5]\d$/, "time_wrong")
			.optional(),
	})
	.superRefine(({ outcome, nextOn, nextTime }, context) => {
		// "Ring again" without a day, or a time of no day, would never come up.
		if (nextOn === undefined && (outcome === "call_back" || nextTime !== undefined))
			context.addIssue({ code: "custom", path: ["nextOn"], message: "next_day_needed" });
	});
export type NewContact = z.infer<typeof ContactForm>;
export type ContactWay = (typeof contactWays)[number];
export type ContactOutcome = (typeof contactOutcomes)[number];

/**
 * What becomes of an operation in a survey after a contact about it. Answers that were sent in stand whatever is said on the
 * telephone; who took answers back has refused, until they come again.
 */
export function dispositionAfter(
	now: { disposition: Disposition; withdrawn: boolean },
	outcome: ContactOutcome,
): Disposition {
	const { disposition, withdrawn } = now;
	if (disposition === "complete" || withdrawn) return disposition;
	if (outcome === "refused" || outcome === "not_eligible") return outcome;
	const spoken = outcome === "reached" || outcome === "call_back";
	return spoken && disposition !== "partial" ? "reached" : disposition;
}

export const callFilters = ["to_call", "due", "later", "all"] as const;

/**
 * `?q=&show=&state=&after=&before=&call=&noted=` of the calls to make; `call` is the grower on the line, `noted` the one whom a
 * note was just made of. Nothing typed is an error.
 */
export const CallQuery = z.object({
	q: z.string().trim().max(200).catch(""),
	show: z.enum(callFilters).catch("to_call"),
	state: z.string().max(2).catch("all"),
	...besideParts,
	call: z.guid().nullable().catch(null),
	noted: z.guid().nullable().catch(null),
});
export type CallQuery = z.infer<typeof CallQuery>;
