import type { z } from "zod";
import { env } from "#app/lib/env.server.ts";
import { cursorOf, type Place, placeOf, questionOf } from "#app/publish/api/cursor.server.ts";
import type { Operation } from "#app/publish/api/operations.ts";
import { ApiProblem } from "#app/publish/api/problem.ts";
import { toCsv } from "#app/publish/data-file.ts";
import type { Release } from "#app/publish/release.ts";
import { findRelease } from "#app/publish/releases.server.ts";
import type { Answer, Asked } from "./answer.server.ts";

type Row = Record<string, string | number | null>;
/** Rows, or what they are as JSON already, in one or several runs with commas between all rows. */
type Page = ({ rows: readonly Row[] } | { json: readonly Uint8Array[] }) & { last?: Place | null };

/** @throws ApiProblem 404 without such a release, 410 where its figures were withdrawn. */
export async function standingRelease(number: number): Promise<Release> {
	const release = await findRelease(number);
	if (!release) throw new ApiProblem("release_not_found");
	if (release.withdrawn) throw new ApiProblem("release_withdrawn");
	return release;
}

/** A list, or a page of one, as JSON or CSV with the same fields in the same order. */
export function listAnswer<O extends Operation>(
	operation: O,
	{ request, query, type }: Asked<O>,
	version: string,
	list: (after: Place | null) => Promise<Page>,
): Answer {
	const question = questionOf(new URL(request.url).pathname, query);
	const after = placeOf((query as { cursor?: string }).cursor, question);
	return {
		version,
		async body() {
			const page = await list(after);
			const next = page.last ? nextAddress(request, cursorOf(page.last, question)) : null;
			if ("json" in page) return { content: jsonOf(page.json, next), next };
			const { rows } = page;
			return {
				content: type === "text/csv" ? csvOf(operation.item!, rows) : JSON.stringify({ data: rows, next }),
				next,
			};
		},
	};
}

/** As `JSON.stringify({ data, next })` would write it. */
const jsonOf = (rows: readonly Uint8Array[], next: string | null) =>
	Buffer.concat([Buffer.from('{"data":['), ...rows, Buffer.from(`],"next":${JSON.stringify(next)}}`)]);

function csvOf(item: z.ZodObject, rows: readonly Row[]): string {
	const columns = Object.keys(item.shape);
	return toCsv(
		columns,
		rows.map((row) => columns.map((column) => row[column] ?? null)),
	);
}

function nextAddress(request: Request, cursor: string): string {
	const { pathname, searchParams } = new URL(request.url);
	searchParams.set("cursor", cursor);
	return `${env().BASE_URL}${pathname}?${searchParams}`;
}

/** So many of the codes that are not known are told back. */
const mostTold = 5;

/** @throws ApiProblem 400 for codes that the release does not have, with where those are listed that it has. */
export function requireKnown(
	request: Request,
	parameter: "measure" | "crop" | "area" | "state",
	given: readonly string[] | undefined,
	known: readonly string[],
): void {
	const listed = new Set(known);
	const unknown = given?.filter((code) => !listed.has(code)) ?? [];
	if (unknown.length === 0) return;
	const folder = new URL(request.url).pathname.replace(/\/[^/]+\/?$/, "");
	const list = { measure: "measures", crop: "crops", area: "areas", state: "areas?kind=state" }[parameter];
	const values = { given: unknown.slice(0, mostTold).join(", "), list: `${env().BASE_URL}${folder}/${list}` };
	throw new ApiProblem("bad_parameter", [{ parameter, code: "unknown_listed", values, allowed: known }]);
}
