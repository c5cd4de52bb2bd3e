import type { TFunction } from "i18next";
import { listParameters } from "#app/publish/api/openapi.ts";
import { operationIds, operations } from "#app/publish/api/operations.ts";

export type ToldParameter = {
	name: string;
	in: "path" | "query";
	about: string;
	several: boolean;
	/** What it can be: a list of codes, the ends of a range, or an example. */
	choices: string[];
	range: { least: number; most: number } | null;
	example: string | null;
	usual: string | null;
};
export type ToldOperation = {
	id: string;
	path: string;
	/** As it is asked for. */
	line: string;
	types: string[];
	fields: string[];
	parameters: ToldParameter[];
};

type Schema = {
	type?: string;
	items?: Schema;
	enum?: string[];
	minimum?: number;
	maximum?: number;
	examples?: unknown[];
	default?: unknown;
};

/** The API as its reference page tells it, out of the same list that it is made of. */
export function toldOperations(t: TFunction): ToldOperation[] {
	return operationIds.map((id) => ({
		id,
		path: operations[id].path,
		line: `GET /api/v1${operations[id].path}`,
		types: operations[id].types,
		fields: Object.keys(operations[id].item?.shape ?? {}),
		parameters: listParameters(operations[id], t).map((parameter) => {
			const schema = parameter.schema as Schema;
			const one = schema.items ?? schema;
			// The largest number that a column holds says nothing to a reader.
			const ranged = one.minimum !== undefined && one.maximum !== undefined && one.maximum < 1_000_000;
			return {
				name: parameter.name,
				in: parameter.in,
				about: parameter.description,
				several: parameter.several,
				choices: one.enum ?? [],
				range: ranged ? { least: one.minimum!, most: one.maximum! } : null,
				example: one.examples?.[0] === undefined ? null : String(one.examples[0]),
				usual: schema.default === undefined ? null : String(schema.default),
			};
		}),
	}));
}
