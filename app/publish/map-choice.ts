import { z } from "zod";
import { classWays } from "./class-steps.ts";

const releaseNumber = z.coerce.number().int().positive().max(2_147_483_647).optional().catch(undefined);
const text = z.string().trim().max(100).optional().catch(undefined);

/** What the map's address may say. A word that means nothing is as if it were absent; what is shown is said on the page. */
export const MapQuery = z.object({
	release: releaseNumber,
	/** The release drawn beside it. */
	beside: releaseNumber,
	measure: text,
	crop: text,
	kind: z.enum(["county", "district"]).catch("county"),
	/** Natural breaks or fixed steps. */
	classes: z.enum(classWays).catch("natural"),
	/** The state that the map is zoomed to, by FIPS code. */
	state: z
		.string()
		.regex(/^\d{2}$/)
		.optional()
		.catch(undefined),
	area: text,
	/** An area's name, or some of it, as somebody typed it to find the area. */
	find: z.string().trim().max(200).optional().catch(undefined),
	q: z.string().trim().max(200).catch(""),
	sort: z.enum(["area", "value", "earlier", "change"]).catch("area"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	/** Of the table; the map shows all. */
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type MapQuery = z.infer<typeof MapQuery>;

export function readMapQuery(url: string): MapQuery {
	return MapQuery.parse(Object.fromEntries(new URL(url).searchParams));
}

/** The wanted key if it is on offer, else the first on offer; `changed` says that something else was wanted. */
export function choose(wanted: string | undefined, offered: string[]): { key: string | undefined; changed: boolean } {
	if (wanted !== undefined && offered.includes(wanted)) return { key: wanted, changed: false };
	return { key: offered[0], changed: wanted !== undefined };
}

/** The areas that a view lists and counts: those of the state that it is zoomed to, or all. */
export function inState<A extends { stateFips: string | null }>(areas: A[], state: string | null): A[] {
	return state === null ? areas : areas.filter((area) => area.stateFips === state);
}
