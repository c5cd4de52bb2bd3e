import { z } from "zod";
import { Words } from "./words.ts";

const Key = z.string();
const Question = z.object({
	key: Key,
	type: z.string(),
	text: Words,
	help: Words.optional(),
	required: z.boolean(),
	unitFamily: z.string().optional(),
	limits: z.record(z.string(), z.number()).optional(),
	options: z.array(z.object({ key: Key, text: Words })).optional(),
	condition: z.unknown().optional(),
});

/**
 * What of a survey's form stands in its release: the questions as growers read them, in both languages. Reading a whole form
 * with this leaves out all else, such as measures and checks.
 */
export const AskedForm = z.object({
	key: Key,
	title: Words,
	minutes: z.number(),
	screens: z.array(
		z.object({
			key: Key,
			title: Words,
			help: Words.optional(),
			/** Asked once for each planting. */
			perPlanting: z.boolean(),
			questions: z.array(Question),
			condition: z.unknown().optional(),
		}),
	),
});
export type AskedForm = z.infer<typeof AskedForm>;
export type AskedScreen = AskedForm["screens"][number];
export type AskedQuestion = AskedScreen["questions"][number];
