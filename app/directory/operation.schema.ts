import { z } from "zod";
import { cropKeys } from "./crops.ts";

/** Whether mail about surveys gets to an operation, and why not. */
export const mailStates = ["any", "reachable", "none", "returned", "stopped"] as const;
/** In which season somebody last answered, counted from the newest in which anything was asked. */
export const answeredWhens = ["any", "this", "last", "not_this", "not_two", "never"] as const;

/**
 * `?q=&state=&district=&crop=&answered=&mail=&sort=&direction=&page=`: what may stand in the address of the list of growers.
 * A wrong or missing part falls back; nothing typed is an error.
 */
export const OperationQuery = z.object({
	q: z.string().trim().max(100).catch(""),
	state: z
		.string()
		.regex(/^\d{2}$/)
		.nullable()
		.catch(null),
	district: z
		.string()
		.regex(/^[A-Z]{2}-\w{1,20}$/)
		.nullable()
		.catch(null),
	crop: z.enum(cropKeys).nullable().catch(null),
	answered: z.enum(answeredWhens).catch("any"),
	mail: z.enum(mailStates).catch("any"),
	sort: z.enum(["name", "owner", "county", "trees"]).catch("name"),
	direction: z.enum(["asc", "desc"]).catch("asc"),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type OperationQuery = z.infer<typeof OperationQuery>;

/** The parts of a query that differ from the plain list, as they stand in its address. The page is no part of a view. */
export function queryParts(query: OperationQuery): Record<string, string> {
	const plain: Record<string, unknown> = OperationQuery.parse({});
	const told = Object.entries(query).filter(
		([name, value]) => name !== "page" && value !== null && value !== plain[name],
	);
	return Object.fromEntries(told.map(([name, value]) => [name, String(value)]));
}
