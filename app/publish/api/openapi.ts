import type { TFunction } from "i18next";
import { z } from "zod";
import { groupBy } from "#app/lib/group-by.ts";
import { ProblemDetails } from "./items.ts";
import { type Operation, type OperationId, operationIds, operations } from "./operations.ts";
import { ApiProblem, problemBody, problemStatus, type ProblemCode } from "./problem.ts";
import { isList } from "./read-request.ts";

type Json = Record<string, unknown>;

/** The API as an OpenAPI 3.1 document. Its schemas are made from those that check requests and that tests hold answers to. */
export function openApiDocument(site: string, t: TFunction): Json {
	return {
		openapi: "3.1.0",
		info: { title: t("dataroom:api.title"), version: "1.0.0", description: t("dataroom:api.lead") },
		servers: [{ url: `${site}/api/v1` }],
		externalDocs: { url: `${site}/api`, description: t("dataroom:api.reference") },
		security: [{}, { key: [] }],
		paths: Object.fromEntries(
			operationIds.map((id) => [operations[id].path || "/", { get: operationOf(id, operations[id], site, t) }]),
		),
		components: {
			securitySchemes: { key: { type: "http", scheme: "bearer", description: t("dataroom:api.keyAbout") } },
			schemas: { ProblemDetails: schemaOf(ProblemDetails, "output") },
		},
	};
}

function operationOf(id: OperationId, operation: Operation, site: string, t: TFunction): Json {
	return {
		operationId: id,
		summary: t(`dataroom:api.operation.${id}.name`),
		description: t(`dataroom:api.operation.${id}.about`),
		parameters: [...parametersOf(operation.params, "path", t), ...parametersOf(operation.query, "query", t)],
		responses: {
			200: { description: t("dataroom:api.answer.200"), headers: headersOf(t), content: contentOf(operation) },
			304: { description: t("dataroom:api.answer.304") },
			...(operation.body === null && {
				206: { description: t("dataroom:api.answer.206"), content: contentOf(operation) },
			}),
			...Object.fromEntries(refusalsOf(operation, site, t)),
		},
	};
}

/** Each parameter as its schema tells it, for the document and the reference page alike. */
export type Parameter = {
	name: string;
	in: "path" | "query";
	required: boolean;
	description: string;
	several: boolean;
	schema: Json;
};

export function listParameters(operation: Operation, t: TFunction): Parameter[] {
	return [parameters(operation.params, "path", t), parameters(operation.query, "query", t)].flat();
}

function parameters(schema: z.ZodObject, where: "path" | "query", t: TFunction): Parameter[] {
	return Object.entries(schema.shape).map(([name, one]) => ({
		name,
		in: where,
		required: where === "path",
		description: t(`dataroom:api.parameter.${name}`),
		several: isList(schema, name),
		schema: schemaOf(one as z.ZodType, "input"),
	}));
}

function parametersOf(schema: z.ZodObject, where: "path" | "query", t: TFunction): Json[] {
	return parameters(schema, where, t).map(({ several, ...parameter }) => ({
		...parameter,
		...(several && { style: "form", explode: false }),
	}));
}

function contentOf({ types, body }: Operation): Json {
	if (body === null) return { "*/*": { schema: { type: "string", format: "binary" } } };
	const schema = schemaOf(body, "output");
	return Object.fromEntries(types.map((type) => [type, { schema: type === "text/csv" ? { type: "string" } : schema }]));
}

function headersOf(t: TFunction): Json {
	const text = (key: string) => ({ description: t(`dataroom:api.header.${key}`), schema: { type: "string" } });
	return { ETag: text("etag"), Link: text("link"), RateLimit: text("ratelimit") };
}

const anywhere: ProblemCode[] = [
	"bad_parameter",
	"key_not_valid",
	"key_expired",
	"access_ended",
	"key_out_of_scope",
	"method_not_allowed",
	"not_acceptable",
	"too_many_requests",
	"service_away",
];

/** Refusals by status. Several codes can have one status: each is told by its title and by an example of what is answered. */
function refusalsOf({ path, body }: Operation, site: string, t: TFunction): [number, Json][] {
	const codes: ProblemCode[] = [...anywhere];
	if (path.includes("{release}")) codes.push("release_not_found", "release_withdrawn");
	if (body === null) codes.push("files_not_ready", "file_not_found", "range_outside");
	return [...groupBy(codes, (code) => problemStatus[code])].map(([status, alike]) => [
		status,
		{
			description: alike.map((code) => t(`dataroom:api.problem.${code}.title`)).join(" / "),
			content: {
				"application/problem+json": {
					schema: { $ref: "#/components/schemas/ProblemDetails" },
					examples: Object.fromEntries(
						alike.map((code) => [
							code,
							{ value: problemBody(new ApiProblem(code), `/api/v1${path}`, `${site}/api`, t) },
						]),
					),
				},
			},
		},
	]);
}

function schemaOf(schema: z.ZodType, io: "input" | "output"): Json {
	const { $schema: _draft, ...rest } = z.toJSONSchema(schema, { io }) as Json;
	return rest;
}
