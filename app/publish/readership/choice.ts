import { z } from "zod";
import { languages } from "#app/i18n/language.ts";

const several = (value: unknown) => (value === undefined ? [] : Array.isArray(value) ? value : [value]);

/** What somebody asks for: reports in a language, on some crops and states. None named means all. */
export const SubscribeForm = z.object({
	email: z.string({ error: "empty" }).trim().min(1, "empty").max(254, "too_long").pipe(z.email("email_wrong")),
	language: z.enum(languages, { error: "choice_wrong" }),
	crops: z.preprocess(several, z.array(z.string().regex(/^[a-z_]{1,40}$/, "choice_wrong")).max(60)),
	states: z.preprocess(several, z.array(z.string().regex(/^\d{2}$/, "choice_wrong")).max(60)),
});
export type Subscription = z.infer<typeof SubscribeForm>;

/** What a report is about: the crops of which it tells a figure, and the states of its release. */
export type Subject = { crops: string[]; states: string[] };

/** Whether a report is one that somebody asked for. */
export function isWanted(choice: Pick<Subscription, "crops" | "states">, subject: Subject): boolean {
	return meets(choice.crops, subject.crops) && meets(choice.states, subject.states);
}

/** Naming nothing is naming all. */
const meets = (chosen: string[], told: string[]) => chosen.length === 0 || told.some((one) => chosen.includes(one));
