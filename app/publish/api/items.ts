import { z } from "zod";
import { areaKinds } from "../cell.ts";
import { columnType, type DataColumn, dataColumns, filledColumns, observationStatuses } from "../data-file.ts";

/** What the API answers with, item by item. JSON and CSV have the same fields, so none holds another in itself. */

const moment = z.iso.datetime();
const text = z.string();

export const ReleaseItem = z.object({
	number: z.int().positive(),
	title_en: text,
	title_es: text,
	season: z.int(),
	form: text,
	edition: z.int().positive(),
	state: z.enum(["current", "replaced", "withdrawn"]),
	published_at: moment,
	respondents_band: text.nullable(),
	revision_reason_en: text.nullable(),
	revision_reason_es: text.nullable(),
	replaced_by: z.int().nullable(),
	withdrawn_at: moment.nullable(),
	withdrawal_reason_en: text.nullable(),
	withdrawal_reason_es: text.nullable(),
	address: z.url(),
});

export const MeasureItem = z.object({
	measure: text,
	name_en: text,
	name_es: text,
	description_en: text,
	description_es: text,
	kind: z.enum(["ratio", "mean", "total", "proportion", "day"]),
	unit: text,
	decimals: z.int().min(0),
});

export const CropItem = z.object({ crop: text, name_en: text, name_es: text });

export const AreaItem = z.object({
	area_code: text,
	area_kind: z.enum(areaKinds),
	area_name: text,
	lies_in: text.nullable(),
	state_code: text.nullable(),
});

export const FileItem = z.object({
	name: text,
	media_type: text,
	bytes: z.int().min(0),
	sha256: z.string().regex(/^[0-9a-f]{64}$/),
	address: z.url(),
});

const types = { text, integer: z.int(), number: z.number(), date: z.iso.date() };
const cellField = (column: DataColumn) => {
	if (column === "status") return z.enum(observationStatuses);
	const type = types[columnType(column)];
	return filledColumns.includes(column) ? type : type.nullable();
};
/** A row of cells.csv. */
export const CellItem = z.object(Object.fromEntries(dataColumns.map((column) => [column, cellField(column)])));

const position = z.array(z.number()).min(2).max(2);
const ring = z.array(position).min(4);
const Shape = z.discriminatedUnion("type", [
	z.object({ type: z.literal("Polygon"), coordinates: z.array(ring).min(1) }),
	z.object({ type: z.literal("MultiPolygon"), coordinates: z.array(z.array(ring).min(1)).min(1) }),
]);
export const Geometry = z.object({
	type: z.literal("FeatureCollection"),
	features: z.array(
		z.object({ type: z.literal("Feature"), id: text, geometry: Shape.nullable(), properties: AreaItem }),
	),
});

export const Entry = z.object({
	releases: z.url(),
	openapi: z.url(),
	reference: z.url(),
	data: z.url(),
});

/** A page of items; `next` is the address of what follows, null at the end. */
export const pageOf = <S extends z.ZodType>(item: S) => z.object({ data: z.array(item), next: z.url().nullable() });

/** A refusal after RFC 9457. `errors` names each parameter that needs mending. */
export const ProblemDetails = z.object({
	type: z.url(),
	title: text,
	status: z.int().min(400).max(599),
	detail: text,
	instance: text,
	errors: z.array(z.object({ parameter: text, detail: text, allowed: z.array(text).optional() })).optional(),
});
export type ProblemDetails = z.infer<typeof ProblemDetails>;
