import { z } from "zod";

/** Where a row stands in its list: what the list is in the order of, and last what tells it from any other row. */
export type Place = (string | number | boolean)[];
/** A page of a list, with the places beside which its neighbours begin; null where there is none. */
export type PageByKey<Row> = { rows: Row[]; before: string | null; after: string | null };

const Place = z.array(z.union([z.string(), z.number(), z.boolean()])).max(8);
const place = z
	.string()
	.max(3_000)
	.transform((text) => {
		try {
			return JSON.parse(text) as unknown;
		} catch {
			return null;
		}
	})
	.pipe(Place)
	.optional()
	.catch(undefined);

/** `?after=` and `?before=` of a list's address: the row beside which the page begins. A wrong one falls back to the first page. */
export const besideParts = { after: place, before: place };
export type Beside = { after?: Place | undefined; before?: Place | undefined };

/** A row's place as it stands in an address. */
export const placeText = (of: Place): string => JSON.stringify(of);
