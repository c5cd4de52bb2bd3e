import { z } from "zod";

export const releaseStates = ["current", "replaced", "withdrawn"] as const;

/** `?q=&season=&state=&what=` of the catalogue. What is not understood falls back to all: nothing typed is an error. */
export const CatalogueQuery = z.object({
	q: z.string().trim().max(200).catch(""),
	season: z.coerce.number().int().min(1900).max(9999).nullable().catch(null),
	state: z
		.string()
		.regex(/^\d{2}$/)
		.nullable()
		.catch(null),
	what: z.enum(releaseStates).nullable().catch(null),
});
export type CatalogueQuery = z.infer<typeof CatalogueQuery>;

export type CatalogueEntry = {
	number: number;
	season: number;
	what: (typeof releaseStates)[number];
	stateFips: string[];
	/** Everything that a search looks through, in both languages. */
	text: string;
};

/** Words may stand in any order and in either language; case and accents make no difference. */
export function fitsCatalogue(entry: CatalogueEntry, { q, season, state, what }: CatalogueQuery): boolean {
	const text = plain(entry.text);
	const words = plain(q).split(/\s+/).filter(Boolean);
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
