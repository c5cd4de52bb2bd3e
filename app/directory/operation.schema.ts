import { z } from "zod";
import { besideParts } from "#app/lib/page-by-key.ts";
import { cropKeys } from "./crops.ts";

/** Whether mail about surveys gets to an operation, and why not. */
export const mailStates = ["any", "reachable", "none", "returned", "stopped"] as const;
/** In which season somebody last answered, counted from the newest in which anything was asked. */
export const answeredWhens = ["any", "this", "last", "not_this", "not_two", "never"] as const;

/**
 * `?q=&state=&district=&crop=&answered=&mail=&sort=&direction=&after=&before=`: what may stand in the address of the list of growers.
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
	...besideParts,
});
export type OperationQuery = z.infer<typeof OperationQuery>;

/** The parts of a query that differ from the plain list, as they stand in its address. The page is no part of a view. */
export function queryParts({ after: _after, before: _before, ...view }: OperationQuery): Record<string, string> {
	const plain: Record<string, unknown> = OperationQuery.parse({});
	const told = Object.entries(view).filter(([name, value]) => value !== null && value !== plain[name]);
	return Object.fromEntries(told.map(([name, value]) => [name, String(value)]));
}
