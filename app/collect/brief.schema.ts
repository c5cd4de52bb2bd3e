import { z } from "zod";
import { numberField, optionalField } from "#app/lib/number-field.ts";
import { plannedLevels } from "./brief.ts";

const text = (most: number) => z.string().trim().max(most, "too_long").default("");
/** Rows of planned figures that the page offers; one without a measure is no plan. */
export const plannedRows = 6;

const PlannedRow = z.object({
	measureKey: z.string().max(80).default(""),
	cropKey: z.string().max(40).default("all"),
	level: z.enum(plannedLevels, { error: "choice_wrong" }).default("state"),
	smallestN: optionalField(numberField(1, 100_000, true)),
	largestCv: optionalField(numberField(0.1, 100)),
});

/** A brief as the desk's page sends it. Whether the form has the measures, the writing function checks. */
export const BriefForm = z.object({
	why: text(2000),
	askedBy: text(300),
	decision: text(2000),
	version: z.coerce.number().int().min(0),
	planned: z.array(PlannedRow).max(plannedRows).default([]),
});
export type BriefForm = z.infer<typeof BriefForm>;
