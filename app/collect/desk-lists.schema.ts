import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";

// What may stand in the address of the desk's lists. A wrong or missing part falls back; nothing typed is an error.
const direction = z.enum(["asc", "desc"]).catch("asc");
const page = z.coerce.number().int().min(1).max(100_000).catch(1);

/** `?survey=&sort=&direction=&page=` of the counts by county. */
export const CountQuery = z.object({
	survey: z.guid().nullable().catch(null),
	sort: z.enum(["county", "state", "asked", "answered", "share"]).catch("county"),
	direction,
	page,
});
export type CountQuery = z.infer<typeof CountQuery>;

/** Which growers of a survey's frame a list shows. */
export const frameFilters = ["all", "answered", "not_answered", "mail_returned", "no_address"] as const;

/** `?q=&show=&sort=&direction=&after=&before=&all=1` of a survey's growers; `all` puts them on one page, for paper. */
export const FrameQuery = z.object({
	q: z.string().trim().max(200).catch(""),
	show: z.enum(frameFilters).catch("all"),
	sort: z.enum(["name", "county", "disposition", "answered"]).catch("name"),
	direction,
	...besideParts,
	all: z
		.literal("1")
		.transform(() => true)
		.catch(false),
});
export type FrameQuery = z.infer<typeof FrameQuery>;
