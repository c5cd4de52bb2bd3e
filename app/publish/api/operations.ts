import { z } from "zod";
import { AreaItem, CellItem, CropItem, Entry, FileItem, Geometry, MeasureItem, pageOf, ReleaseItem } from "./items.ts";
import { path, queries } from "./parameters.ts";

const json = "application/json";
const csv = "text/csv";
const geojson = "application/geo+json";

/** The part of a key's rights that an operation needs when a key is sent. */
export type Scope = "figures" | "files";

export type Operation = {
	/** From the API's root, with the places of path parameters. */
	path: string;
	params: z.ZodObject;
	query: z.ZodObject;
	/** Media types it can answer with, the usual one first; empty where a file's own type is answered. */
	types: string[];
	/** What a JSON answer is; CSV has the fields of `item`. Null for a file. */
	body: z.ZodType | null;
	item: z.ZodObject | null;
	scope: Scope;
};

const ofRelease = z.object({ release: path.release });
const none = z.object({});

function list<Item extends z.ZodObject, Query extends z.ZodObject, Params extends z.ZodObject>(
	at: string,
	item: Item,
	query: Query,
	params: Params,
) {
	const scope: Scope = "figures";
	return { path: at, params, query, types: [json, csv], body: pageOf(item), item, scope };
}

/** Every address of the API. The OpenAPI document, the reference page and the routes are made of this one list. */
export const operations = {
	entry: { path: "", params: none, query: queries.none, types: [json], body: Entry, item: null, scope: "figures" },
	openapi: {
		path: "/openapi.json",
		params: none,
		query: queries.none,
		types: [json],
		body: z.looseObject({ openapi: z.literal("3.1.0") }),
		item: null,
		scope: "figures",
	},
	releases: list("/releases", ReleaseItem, queries.releases, none),
	release: {
		path: "/releases/{release}",
		params: ofRelease,
		query: queries.none,
		types: [json],
		body: ReleaseItem,
		item: null,
		scope: "figures",
	},
	measures: list("/releases/{release}/measures", MeasureItem, queries.none, ofRelease),
	crops: list("/releases/{release}/crops", CropItem, queries.none, ofRelease),
	areas: list("/releases/{release}/areas", AreaItem, queries.areas, ofRelease),
	cells: list("/releases/{release}/cells", CellItem, queries.cells, ofRelease),
	geometry: {
		path: "/releases/{release}/geometry",
		params: ofRelease,
		query: queries.geometry,
		types: [geojson, json],
		body: Geometry,
		item: null,
		scope: "figures",
	},
	files: { ...list("/releases/{release}/files", FileItem, queries.none, ofRelease), scope: "files" as Scope },
	file: {
		path: "/releases/{release}/files/{file}",
		params: z.object(path),
		query: queries.none,
		types: [],
		body: null,
		item: null,
		scope: "files",
	},
} satisfies Record<string, Operation>;
export type OperationId = keyof typeof operations;
export const operationIds = Object.keys(operations) as OperationId[];
