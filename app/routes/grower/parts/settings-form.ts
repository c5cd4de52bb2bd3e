import { z } from "zod";
import { cleanText } from "#app/collect/typed-text.ts";
import { isMassUnit } from "#app/collect/units.ts";

const text = (max: number) =>
	z.string().max(2000, "too_long").transform(cleanText).pipe(z.string().max(max, "too_long"));

/** Contact, language and unit as a grower sets them. An empty e-mail or telephone is none. */
export const SettingsForm = z.object({
	contactName: z.string({ error: "empty" }).pipe(text(200)).pipe(z.string().min(1, "empty")),
	email: z
		.string()
		.trim()
		.pipe(z.email("email_wrong").max(254, "too_long"))
		.optional()
		.transform((email) => email ?? null),
	phone: text(40)
		.optional()
		.transform((phone) => phone || null),
	language: z.enum(["en", "es"], "choice_wrong"),
	massUnit: z.string("choice_wrong").refine(isMassUnit, "choice_wrong"),
	mailWanted: z.boolean().default(false),
});
