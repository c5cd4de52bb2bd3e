import { type Expression, type QueryExecutorProvider, type RawBuilder, sql } from "kysely";
import { z } from "zod";
import { type Beside, type PageByKey, type Place, placeText } from "./page-by-key.ts";

/** Beyond this a list that must be gone through to be counted is told as "more than". */
export const countedTo = 1_000;
/** `moreThanTotal` where the list is longer than `total`, which is as far as it was counted. */
export type Counted = { total: number; moreThanTotal: boolean };

/** How long a list is, as far as it is counted. @param rows the list's rows, at most so many. */
export async function countRows(
	db: QueryExecutorProvider,
	rows: (most: number) => Expression<unknown>,
): Promise<Counted> {
	const counted = await sql<{ rows: number }>`select count(*)::int as rows from ${rows(countedTo + 1)} c`.execute(db);
	const [{ rows: found }] = counted.rows as [{ rows: number }];
	return { total: Math.min(found, countedTo), moreThanTotal: found > countedTo };
}

type Column = RawBuilder<unknown>;
type KeyKind = { given: z.ZodType<Place[number]>; told: (by: Column) => Column; read: (value: unknown) => Column };

const plain = (by: Column) => by;
const microseconds = sql`interval '1 microsecond'`;

/**
 * How each kind of key is written into an address and read from one. Whatever is let in here, the database can read too: an
 * address that somebody typed is no fault of the server.
 */
const keyKinds = {
	text: {
		given: z.string().refine((text) => !text.includes("\0")),
		told: plain,
		read: (value) => sql`${value}::text`,
	},
	uuid: { given: z.guid(), told: plain, read: (value) => sql`${value}::uuid` },
	int8: { given: z.int(), told: plain, read: (value) => sql`${value}::int8` },
	float8: {
		given: z.union([z.number(), z.enum(["Infinity", "-Infinity"])]),
		told: plain,
		read: (value) => sql`${value}::float8`,
	},
	boolean: { given: z.boolean(), told: plain, read: (value) => sql`${value}::boolean` },
	// To the microsecond, which a date of JavaScript does not hold.
	instant: {
		given: z.int(),
		told: (by) => sql`(extract(epoch from ${by}) * 1000000)::int8`,
		read: (value) => sql`(timestamptz 'epoch' + ${value}::int8 * ${microseconds})`,
	},
} satisfies Record<string, KeyKind>;

/** What a list is in the order of. None is ever null, and the last is unlike in any two rows. */
export type SortKey = { by: Column; kind: keyof typeof keyKinds };
/** All keys go one way, so that an index on them serves the list from either end; one that goes the other way is negated. */
export type Order = { keys: readonly SortKey[]; direction: "asc" | "desc" };
/** What a query is given to read one page: a condition, an order, how many rows, and what to select as their `place`. */
export type PagePart = {
	beyond: RawBuilder<boolean>;
	/** As `beyond`, of the first so many keys alone, and true where they are alike: which groups of rows can be on the page. */
	reach: (keys: number) => RawBuilder<boolean>;
	inOrder: Column;
	place: RawBuilder<Place>;
	limit: number;
	direction: Order["direction"];
};

const otherWay = { asc: "desc", desc: "asc" } as const;

/**
 * A page of a list that begins beside a row and not at a number: rows that come or go on other pages move none, so that who
 * goes from page to page sees no row twice and misses none. Where the wanted rows are gone, the nearest page is shown.
 */
export function pageByKey<Row extends { place: Place }>(
	order: Order,
	beside: Beside,
	size: number,
	read: (part: PagePart) => Promise<Row[]>,
): Promise<PageByKey<Omit<Row, "place">>> {
	const back = { ...order, direction: otherWay[order.direction] };
	return pageBeside(
		(place) => placeIn(order, place),
		beside,
		size,
		(way, from, limit) => read(partOf(way === "on" ? order : back, from, limit)),
	);
}

/** Rows of a list that are in an order of their own. */
export type ListPart<Row> = { order: Order; read: (part: PagePart) => Promise<Row[]> };

/**
 * A page as of `pageByKey`, of a list whose parts follow one another, each read by a query that suits it. The next part is
 * asked only while rows are missing. A place begins with the number of its part.
 */
export function pageByParts<Row extends { place: Place }>(
	parts: readonly ListPart<Row>[],
	beside: Beside,
	size: number,
): Promise<PageByKey<Omit<Row, "place">>> {
	const numbered = [...parts.entries()];
	const known = (place: Place | undefined) => {
		const part = parts[Number(place?.[0])];
		return part && placeIn(part.order, place?.slice(1)) ? place! : null;
	};
	return pageBeside(known, beside, size, async (way, from, limit) => {
		const first = from && Number(from[0]);
		const inTurn = way === "on" ? numbered : numbered.toReversed();
		const rows: Row[] = [];
		for (const [i, { order, read }] of inTurn.slice(inTurn.findIndex(([of]) => of === (first ?? of)))) {
			if (rows.length >= limit) break;
			const direction = way === "on" ? order.direction : otherWay[order.direction];
			const start = i === first ? from!.slice(1) : null;
			const found = await read(partOf({ ...order, direction }, start, limit - rows.length));
			rows.push(...found.map((row) => ({ ...row, place: [i, ...row.place] })));
		}
		return rows;
	});
}

async function pageBeside<Row extends { place: Place }>(
	known: (place: Place | undefined) => Place | null,
	{ after, before }: Beside,
	size: number,
	read: (way: "on" | "back", from: Place | null, limit: number) => Promise<Row[]>,
): Promise<PageByKey<Omit<Row, "place">>> {
	const [end, start] = [known(before), known(after)];
	if (end) {
		const found = await read("back", end, size + 1);
		if (found.length > 0)
			return pageOf(found.slice(0, size).toReversed(), { before: found.length > size, after: true });
	}
	const from = end ? null : start;
	const found = await read("on", from, size + 1);
	if (found.length > 0 || !from)
		return pageOf(found.slice(0, size), { before: from !== null, after: found.length > size });
	const last = await read("back", null, size + 1);
	return pageOf(last.slice(0, size).toReversed(), { before: last.length > size, after: false });
}

function pageOf<Row extends { place: Place }>(
	rows: Row[],
	more: { before: boolean; after: boolean },
): PageByKey<Omit<Row, "place">> {
	const [first, last] = [rows[0], rows.at(-1)];
	return {
		rows: rows.map(({ place: _place, ...row }) => row),
		before: first && more.before ? placeText(first.place) : null,
		after: last && more.after ? placeText(last.place) : null,
	};
}

/** A place of an address as this order reads it, or null where it is of another. */
function placeIn({ keys }: Order, place: Place | undefined): Place | null {
	if (place?.length !== keys.length) return null;
	return keys.every(({ kind }, i) => keyKinds[kind].given.safeParse(place[i]).success) ? place : null;
}

function partOf({ keys, direction }: Order, from: Place | null, limit: number): PagePart {
	const side = direction === "asc" ? ">" : "<";
	const compared = (by: string, first: readonly SortKey[]) =>
		from
			? sql<boolean>`(${sql.join(first.map((key) => key.by))}) ${sql.raw(by)}
				(${sql.join(first.map(({ kind }, i) => keyKinds[kind].read(from[i])))})`
			: sql<boolean>`true`;
	return {
		beyond: compared(side, keys),
		reach: (count) => compared(`${side}=`, keys.slice(0, count)),
		direction,
		inOrder: sql.join(keys.map(({ by }) => sql`${by} ${sql.raw(direction)}`)),
		place: sql<Place>`jsonb_build_array(${sql.join(keys.map(({ by, kind }) => keyKinds[kind].told(by)))})`,
		limit,
	};
}
