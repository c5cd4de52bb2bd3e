import { z } from "zod";
import { cleanText } from "#app/collect/typed-text.ts";
import { isMassUnit } from "#app/collect/units.ts";
import { languages } from "#app/i18n/language.ts";
import { newPlantingForm } from "../../../grower/parts/planting-form.ts";

/** So many plantings can be written down with a new operation; more are added on its page. */
export const mostPlantings = 12;

const text = (max: number) =>
	z.string({ error: "empty" }).transform(cleanText).pipe(z.string().min(1, "empty").max(max, "too_long"));

/** What an associate writes down of an operation, new or known. */
export const OperationForm = z.object({
	name: text(200),
	contactName: text(200),
	phone: z
		.string()
		.transform(cleanText)
		.pipe(z.string().max(40, "too_long"))
		.optional()
		.transform((phone) => phone || null),
	countyFips: z.string({ error: "empty" }).regex(/^\d{5}$/, "unknown_county"),
	language: z.enum(languages, "choice_wrong"),
	massUnit: z.string("choice_wrong").refine(isMassUnit, "choice_wrong"),
});

/** What is told of a new operation besides: who owns it, an owner known already or one by name, and where mail goes. */
const NewOperationFields = OperationForm.extend({
	ownerName: text(200),
	ownerId: z
		.guid()
		.optional()
		.transform((ownerId) => ownerId ?? null),
	email: z
		.email("email_wrong")
		.max(254, "too_long")
		.optional()
		.transform((email) => email ?? null),
});

/** A row of boxes in which nothing was typed is no planting. */
function isBlank(row: unknown): boolean {
	return !row || (typeof row === "object" && Object.values(row).every((value) => value === undefined || value === ""));
}

/** A new operation with its plantings. `confirmed` is sent by who has seen the growers that look alike. */
export const newOperationForm = (language: string, thisYear: number) =>
	NewOperationFields.extend({
		confirmed: z.literal("on").optional(),
		plantings: z
			.array(z.preprocess((row) => (isBlank(row) ? null : row), z.nullable(newPlantingForm(language, thisYear))))
			.max(mostPlantings)
			.optional()
			.transform((rows) => (rows ?? []).filter((row) => row !== null)),
	});
