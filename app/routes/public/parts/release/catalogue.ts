import { z } from "zod";
import type { Problem } from "#app/lib/parse-form.ts";

export const releaseStates = ["current", "replaced", "withdrawn"] as const;

const longestSearch = 200;

/** `?q=&season=&state=&what=` of the catalogue. What is not understood falls back to all. */
export const CatalogueQuery = z.object({
	q: z.string().trim().catch(""),
	season: z.coerce.number().int().min(1900).max(9999).nullable().catch(null),
	state: z
		.string()
		.regex(/^\d{2}$/)
		.nullable()
		.catch(null),
	what: z.enum(releaseStates).nullable().catch(null),
});
export type CatalogueQuery = z.infer<typeof CatalogueQuery>;

/** A search beyond its limit stays in its box, is said to be too long, and narrows nothing. */
export function problemOfSearch({ q }: CatalogueQuery): Problem | undefined {
	if (q.length <= longestSearch) return undefined;
	return { field: "q", code: "search_too_long", detail: { max: longestSearch } };
}

export type CatalogueEntry = {
	number: number;
	season: number;
	what: (typeof releaseStates)[number];
	stateFips: string[];
	/** Everything that a search looks through, in both languages. */
	text: string;
};

/** Words may stand in any order and in either language; case and accents make no difference. */
export function fitsCatalogue(entry: CatalogueEntry, query: CatalogueQuery): boolean {
	const { q, season, state, what } = query;
	const text = plain(entry.text);
	const words = plain(problemOfSearch(query) ? "" : q)
		.split(/\s+/)
		.filter(Boolean);
	return (
		words.every((word) => text.includes(word)) &&
		(season === null || entry.season === season) &&
		(state === null || entry.stateFips.includes(state)) &&
		(what === null || entry.what === what)
	);
}

const plain = (text: string) =>
	text
		.normalize("NFD")
		.replace(/\p{Diacritic}/gu, "")
		.toLowerCase();
