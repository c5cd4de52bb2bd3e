import { z } from "zod";

export const contactWays = ["telephone", "visit", "letter", "other"] as const;
export const contactOutcomes = [
	"reached",
	"message_left",
	"no_answer",
	"call_back",
	"wrong_number",
	"refused",
] as const;

/** A contact as it is noted: how, what came of it, and when to try next. */
export const ContactForm = z.object({
	way: z.enum(contactWays, "choice_wrong"),
	outcome: z.enum(contactOutcomes, "choice_wrong"),
	note: z.string().trim().max(2000, "too_long").default(""),
	nextOn: z.iso.date("date_wrong").optional(),
});
export type NewContact = z.infer<typeof ContactForm>;
export type ContactWay = (typeof contactWays)[number];
export type ContactOutcome = (typeof contactOutcomes)[number];
