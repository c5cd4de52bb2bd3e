import { z } from "zod";

export const answeredParts = ["state", "district", "stratum"] as const;
export const weighings = ["operations", "trees"] as const;

/** `?crop=&by=&weigh=&late=` of the response rates; `late` is a late answer to decide on. A wrong or missing part falls back; nothing typed is an error. */
export const AnsweredQuery = z.object({
	crop: z.string().max(60).catch("all"),
	by: z.enum(answeredParts).catch("state"),
	weigh: z.enum(weighings).catch("operations"),
	late: z.guid().nullable().catch(null),
});
export type AnsweredQuery = z.infer<typeof AnsweredQuery>;
export type Weighing = (typeof weighings)[number];

/** What is to become of a late answer, and why. */
export const LateForm = z.object({
	step: z.enum(["take", "leave"]),
	responseId: z.guid(),
	version: z.coerce.number().int().min(1),
	reason: z.string("empty").trim().min(1, "empty").max(2000, "too_long"),
});
