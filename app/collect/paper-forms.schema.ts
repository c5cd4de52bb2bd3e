import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";

export const paperFilters = ["not_answered", "no_address"] as const;
export const paperLanguages = ["own", "en", "es", "both"] as const;
export const paperSizes = ["letter", "a4"] as const;

/** `?show=&area=&language=&size=&after=&before=` of the paper forms. A wrong or missing part falls back; nothing typed is an error. */
export const PaperQuery = z.object({
	show: z.enum(paperFilters).catch("not_answered"),
	/** All states, one by its code, one of the districts by its key, or one county by its code. */
	area: z
		.string()
		.regex(/^[\w-]{1,100}$/)
		.catch("all"),
	/** The operation's own unless another, or both one after the other, is asked for. */
	language: z.enum(paperLanguages).catch("own"),
	size: z.enum(paperSizes).catch("letter"),
	...besideParts,
});
export type PaperQuery = z.infer<typeof PaperQuery>;

/** The number on a form, by which what comes back is found: the beginning of the operation's id. */
export function formNumberOf(operationId: string): string {
	return operationId.slice(0, 8).toUpperCase();
}
