import { createHmac, timingSafeEqual } from "node:crypto";
import { z } from "zod";
import { env } from "#app/lib/env.server.ts";
import { ApiProblem } from "./problem.ts";

/** The sort key of a page's last row. */
export type Place = (string | number)[];
const Place = z.array(z.union([z.string().max(200), z.number()])).max(8);

/**
 * Where the next page begins, for whoever asked this question. It is signed together with the question: a cursor that was
 * changed, or that is used with other filters, is refused rather than giving rows twice or leaving some out.
 */
export function cursorOf(place: Place, question: string): string {
	const text = Buffer.from(JSON.stringify(place)).toString("base64url");
	return `${text}.${sign(text, question)}`;
}

/** @throws ApiProblem when it was not made here for this question. */
export function placeOf(cursor: string | undefined, question: string): Place | null {
	if (cursor === undefined) return null;
	const [text = "", mac = ""] = cursor.split(".");
	const right = Buffer.from(sign(text, question));
	const given = Buffer.from(mac);
	const wrong = new ApiProblem("bad_parameter", [{ parameter: "cursor", code: "cursor" }]);
	if (given.length !== right.length || !timingSafeEqual(given, right)) throw wrong;
	return Place.parse(JSON.parse(Buffer.from(text, "base64url").toString("utf8")));
}

function sign(text: string, question: string): string {
	return createHmac("sha256", `cursor:${env().SESSION_SECRET}`)
		.update(`${text}\n${question}`)
		.digest("base64url")
		.slice(0, 16);
}

/** A question as one text, however its parameters were ordered; the page's size is no part of it. */
export function questionOf(path: string, query: Record<string, unknown>): string {
	const asked = Object.entries(query)
		.filter(([name, value]) => name !== "cursor" && name !== "limit" && value !== undefined)
		.map(([name, value]) => [name, Array.isArray(value) ? value.toSorted() : value] as const)
		.toSorted(([a], [b]) => (a < b ? -1 : 1));
	return `${path}?${JSON.stringify(asked)}`;
}

/** One page out of a list that is at hand as a whole and is in the order of `keyOf`. */
export function pageOfList<T>(
	all: readonly T[],
	keyOf: (item: T) => string | number,
	{ after, limit }: { after: Place | null; limit: number },
): { rows: T[]; last: Place | null } {
	const from = after === null ? 0 : all.findIndex((item) => keyOf(item) === after[0]) + 1;
	const rows = all.slice(from, from + limit);
	return { rows, last: from + limit < all.length ? [keyOf(rows.at(-1)!)] : null };
}
