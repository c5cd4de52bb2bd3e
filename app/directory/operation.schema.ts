import { z } from "zod";
import { cropKeys } from "./crops.ts";

/** What may stand in the address of a list of operations. A wrong or missing part falls back; nothing typed is an error. */
export const OperationQuery = z.object({
	q: z.string().trim().max(100).catch(""),
	stateFips: z
		.string()
		.regex(/^\d{2}$/)
		.nullable()
		.catch(null),
	cropKey: z.enum(cropKeys).nullable().catch(null),
	sort: z.enum(["name", "owner", "county", "trees"]).catch("name"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type OperationQuery = z.infer<typeof OperationQuery>;

/** Reads a query from an address: `?q=&state=&crop=&sort=&direction=&page=`. */
export function readOperationQuery(search: URLSearchParams): OperationQuery {
	const get = (name: string) => search.get(name) || null;
	return OperationQuery.parse({
		q: get("q") ?? "",
		stateFips: get("state"),
		cropKey: get("crop"),
		sort: get("sort"),
		direction: get("direction"),
		page: get("page") ?? 1,
	});
}

const text = (max: number) => z.string({ error: "empty" }).trim().min(1, "empty").max(max, "too_long");

/** An operation as an associate writes it down. */
export const OperationInput = z.object({
	name: text(200),
	ownerName: text(200),
	countyFips: z.string({ error: "empty" }).regex(/^\d{5}$/, "unknown_county"),
	contactName: text(200),
	email: z.email("email_wrong").max(254, "too_long").optional(),
	phone: z.string().trim().max(40, "too_long").optional(),
	language: z.enum(["en", "es"], "choice_wrong"),
});
export type OperationInput = z.infer<typeof OperationInput>;
