import { z } from "zod";

export const answeredParts = ["state", "district", "stratum"] as const;
export const weighings = ["operations", "trees"] as const;

/** `?crop=&by=&weigh=` of the response rates. A wrong or missing part falls back; nothing typed is an error. */
export const AnsweredQuery = z.object({
	crop: z.string().max(60).catch("all"),
	by: z.enum(answeredParts).catch("state"),
	weigh: z.enum(weighings).catch("operations"),
});
export type AnsweredQuery = z.infer<typeof AnsweredQuery>;
export type Weighing = (typeof weighings)[number];
