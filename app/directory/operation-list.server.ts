import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countRows, type Order, pageByKey } from "#app/lib/page-by-key.server.ts";
import { searchPattern } from "#app/lib/search-pattern.ts";
import { compareCrops } from "./crops.ts";
import type { OperationQuery } from "./operation.schema.ts";
import { isSeenBy, rowColumns, selectOperations } from "./operations.server.ts";

const pageSize = 50;
/** As many as one act on all that match takes at once: more than any state has. */
export const mostAtOnce = 50_000;

/** A further condition on `directory.operation o`, of a stage that knows more than the directory does. */
export type Narrowing = RawBuilder<boolean> | null;
export type OperationRow = Awaited<ReturnType<typeof listOperations>>["rows"][number];

/** A page of operations, those of equal sort values by id. */
export async function listOperations(trx: Trx, viewer: Associate, query: OperationQuery, narrowing: Narrowing = null) {
	const matching = matchingOperations(trx, viewer, query, narrowing);
	const count = await countRows(trx, (most) => toCount(trx, viewer, query, narrowing).limit(most));
	const order = orderOf(query);
	const page = await pageByKey(order, query, pageSize, ({ beyond, inOrder, place, limit }) =>
		matching
			.where(beyond)
			.select(["o.operation_id as operationId", place.as("place")])
			.orderBy(inOrder)
			.limit(limit)
			.execute(),
	);
	const rows = await listByIds(
		trx,
		viewer,
		page.rows.map(({ operationId }) => operationId),
	);
	return { ...page, ...count, rows };
}

/** The ids of all that match, in the list's order. */
export async function listMatchingIds(
	trx: Trx,
	viewer: Associate,
	query: OperationQuery,
	narrowing: Narrowing = null,
): Promise<string[]> {
	const { keys, direction } = orderOf(query);
	const ids = await matchingOperations(trx, viewer, query, narrowing)
		.select("o.operation_id as operationId")
		.orderBy(keys[0]!.by, direction)
		.orderBy("o.operation_id", direction)
		.limit(mostAtOnce)
		.execute();
	return ids.map(({ operationId }) => operationId);
}

/** The operations of these ids that the viewer sees and that are in the list, in the order of the ids. */
export async function listByIds(trx: Trx, viewer: Associate, ids: string[]) {
	const rows = await selectOperations(trx, viewer)
		.where(isListed)
		.where((eb) => eb("o.operation_id", "=", eb.fn.any(eb.val(ids))))
		.innerJoinLateral(growing, (join) => join.onTrue())
		.select(rowColumns)
		.select(["g.crop_keys as cropKeys", "o.all_bearing_trees as bearingTrees"])
		.execute();
	const byId = new Map(
		rows.map((row) => [
			row.operationId,
			{ ...row, language: row.language as "en" | "es", cropKeys: row.cropKeys.toSorted(compareCrops) },
		]),
	);
	return ids.flatMap((id) => byId.get(id) ?? []);
}

/** Who has left and was forgotten has no name to be found by; a duplicate is found under the one that was kept. */
const isListed = sql<boolean>`(o.left_at is null and o.status <> 'merged')`;

/** What each grows now; what was taken out is left aside. */
const growing = sql<{ crop_keys: string[] }>`(select coalesce(array_agg(distinct p.crop_key), '{}') as crop_keys
	from directory.planting p where p.operation_id = o.operation_id and p.removed_on is null)`.as<"g">(sql.ref("g"));

function orderOf({ sort, direction }: OperationQuery): Order {
	const id = { by: sql.ref("o.operation_id"), kind: "uuid" } as const;
	const first = {
		name: { by: sql.ref("o.name"), kind: "text" },
		owner: { by: sql.ref("o.contact_name"), kind: "text" },
		county: { by: sql.ref("c.name"), kind: "text" },
		trees: { by: sql.ref("o.all_bearing_trees"), kind: "int8" },
	} as const;
	return { keys: [first[sort], id], direction };
}

const mailState = {
	reachable: sql<boolean>`(coalesce(o.email, '') <> '' and o.mail_returned_at is null and o.mail_wanted)`,
	none: sql<boolean>`coalesce(o.email, '') = ''`,
	returned: sql<boolean>`(coalesce(o.email, '') <> '' and o.mail_returned_at is not null)`,
	stopped: sql<boolean>`not o.mail_wanted`,
};

/** Found by what its own row and its county tell. */
function isNamed(q: string) {
	const pattern = searchPattern(q);
	return sql<boolean>`(o.name ~* ${pattern} or o.contact_name ~* ${pattern} or o.email ~* ${pattern} or o.phone ~* ${pattern}
		or c.name ~* ${pattern})`;
}

function isOwnedByNamed(q: string) {
	return sql<boolean>`exists (select from directory.owner w where w.owner_id = o.owner_id and w.name ~* ${searchPattern(q)})`;
}

/**
 * One for each operation that matches. Owners are gone through only after all that is found without them: to count no further
 * than countable takes a tenth of them all (50,000 operations: 20 instead of 80 ms).
 */
function toCount(trx: Trx, viewer: Associate, query: OperationQuery, narrowing: Narrowing) {
	const rows = matchingOperations(trx, viewer, { ...query, q: "" }, narrowing).select(sql.lit(1).as("one"));
	const { q } = query;
	if (q === "") return rows;
	const byOwner = rows.where(sql<boolean>`${isNamed(q)} is not true`).where(isOwnedByNamed(q));
	return rows.where(isNamed(q)).unionAll(byOwner);
}

function matchingOperations(trx: Trx, viewer: Associate, query: OperationQuery, narrowing: Narrowing) {
	const { q, state, district, crop, mail } = query;
	// Owners stay out of it but for a search: that one may see an owner is found out for each row (120 of 140 ms for 10,000).
	return trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.where(isSeenBy(viewer))
		.where(isListed)
		.$if(state !== null, (rows) => rows.where("o.state_fips", "=", state!))
		.$if(district !== null, (rows) => rows.where("c.district_key", "=", district!))
		.$if(mail !== "any", (rows) => rows.where(mailState[mail as keyof typeof mailState]))
		.$if(narrowing !== null, (rows) => rows.where(narrowing!))
		.$if(q !== "", (rows) => rows.where((eb) => eb.or([isNamed(q), isOwnedByNamed(q)])))
		.$if(crop !== null, (rows) =>
			rows.where(
				sql<boolean>`exists (select from directory.planting p where p.operation_id = o.operation_id
					and p.crop_key = ${crop} and p.removed_on is null)`,
			),
		);
}
