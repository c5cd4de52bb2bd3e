import { z } from "zod";
import type { Operation } from "./operations.ts";
import { ApiProblem, type Wrong } from "./problem.ts";

/** The path's and the query's parameters of a request, checked. @throws ApiProblem that names each that is wrong. */
export function readRequest<O extends Operation>(
	operation: O,
	params: Record<string, string | undefined>,
	search: URLSearchParams,
): { params: z.infer<O["params"]>; query: z.infer<O["query"]> } {
	const path = operation.params.safeParse(params);
	const { values, wrong } = valuesOf(operation.query, search);
	const query = operation.query.safeParse(values);
	const problems = [
		...wrong,
		...(path.success ? [] : wrongOf(path.error, operation.params)),
		...(query.success ? [] : wrongOf(query.error, operation.query)),
	];
	if (problems.length > 0 || !path.success || !query.success) throw new ApiProblem("bad_parameter", problems);
	return { params: path.data, query: query.data } as { params: z.infer<O["params"]>; query: z.infer<O["query"]> };
}

/** A filter's values may be joined by commas or given one by one; anything else is given once. */
function valuesOf(schema: z.ZodObject, search: URLSearchParams): { values: Record<string, unknown>; wrong: Wrong[] } {
	const values: Record<string, unknown> = {};
	const wrong: Wrong[] = [];
	for (const name of new Set(search.keys())) {
		if (!Object.hasOwn(schema.shape, name)) {
			if (isStrict(schema) && wrong.length < mostUnknown)
				wrong.push({ parameter: shortened(name), code: "unknown_parameter", allowed: Object.keys(schema.shape) });
			continue;
		}
		const given = search.getAll(name);
		if (isList(schema, name)) values[name] = [...new Set(given.flatMap((value) => value.split(",")))];
		else if (given.length > 1) wrong.push({ parameter: shortened(name), code: "twice" });
		else values[name] = given[0];
	}
	return { values, wrong };
}

/** Told once of each parameter, as telling it takes longer than the rest of a request's reading. */
const told = new WeakMap<z.ZodType, Json>();

function schemaOf(schema: z.ZodObject, name: string): Json | undefined {
	if (!Object.hasOwn(schema.shape, name)) return undefined;
	const parameter = schema.shape[name] as z.ZodType;
	const known = told.get(parameter) ?? (z.toJSONSchema(parameter, { io: "input" }) as Json);
	told.set(parameter, known);
	return known;
}
type Json = {
	type?: string;
	items?: Json;
	enum?: string[];
	examples?: unknown[];
	minimum?: number;
	maximum?: number;
	maxItems?: number;
};

export const isList = (schema: z.ZodObject, name: string): boolean => schemaOf(schema, name)?.type === "array";

const isStrict = (schema: z.ZodObject) => schema.def.catchall instanceof z.ZodNever;
/** Names that are not known are told as far as that helps to mend an address. */
const mostUnknown = 20;

/** A name that somebody made up is told back to them, but not at any length. */
const shortened = (name: string) => name.slice(0, 80);

function wrongOf(error: z.ZodError, schema: z.ZodObject): Wrong[] {
	const found = new Map<string, Wrong>();
	for (const issue of error.issues) {
		const parameter = String(issue.path[0]);
		if (!found.has(parameter)) found.set(parameter, wrongValue(parameter, issue, schemaOf(schema, parameter) ?? {}));
	}
	return [...found.values()];
}

function wrongValue(parameter: string, issue: z.core.$ZodIssue, schema: Json): Wrong {
	if (issue.code === "too_big" && issue.origin === "array")
		return { parameter, code: "too_many", values: { most: schema.maxItems ?? 0 } };
	const one = schema.items ?? schema;
	if (parameter === "cursor") return { parameter, code: "cursor" };
	if (one.enum) return { parameter, code: "unknown_code", allowed: one.enum };
	if (one.minimum !== undefined || one.maximum !== undefined)
		return { parameter, code: "out_of_range", values: { least: one.minimum ?? 0, most: one.maximum ?? 0 } };
	return { parameter, code: "malformed", values: { example: String(one.examples?.[0] ?? "") } };
}
