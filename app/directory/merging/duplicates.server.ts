import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findOperation, isSeenBy } from "../operations.server.ts";
import { type Candidate, likelyPairs, pairKey } from "./likely.ts";

/** A list to be worked through from the top; what is merged or set apart makes room. */
const mostPairs = 100;

/** Operations of the viewer's states that are likely one and the same. */
export async function listLikelyPairs(trx: Trx, viewer: Associate) {
	const rows: (Candidate & { countyName: string; statePostal: string })[] = await trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where(isSeenBy(viewer))
		.where("o.status", "=", "active")
		.select(["o.operation_id as operationId", "o.name", "o.contact_name as contactName", "o.email", "o.phone"])
		.select(["o.county_fips as countyFips", "c.name as countyName", "s.postal as statePostal"])
		.execute();
	const apart = await trx.selectFrom("directory.distinct_pair").select(["operation_id", "other_id"]).execute();
	const pairs = likelyPairs(rows, new Set(apart.map((pair) => pairKey(pair.operation_id, pair.other_id))));
	const byId = new Map(rows.map((row) => [row.operationId, row]));
	return {
		total: pairs.length,
		pairs: pairs.slice(0, mostPairs).map(({ a, b, signs }) => ({ a: byId.get(a)!, b: byId.get(b)!, signs })),
	};
}

/** Notes that two operations which look alike are two: they are not shown as a pair any more. Twice is harmless. */
export async function setApart(trx: Trx, viewer: Associate, a: string, b: string): Promise<"set" | "not_found"> {
	const both = [await findOperation(trx, viewer, a), await findOperation(trx, viewer, b)];
	if (a === b || both.some((one) => !one)) return "not_found";
	const [operationId, otherId] = [a, b].toSorted();
	await trx
		.insertInto("directory.distinct_pair")
		.values({ operation_id: operationId!, other_id: otherId!, said_by: viewer.personId })
		.onConflict((conflict) => conflict.doNothing())
		.execute();
	return "set";
}

/** The merges that the viewer can see, newest first. */
export async function listMerges(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("directory.merge as m")
		.innerJoin("directory.operation as o", "o.operation_id", "m.operation_id")
		.innerJoin("directory.operation as d", "d.operation_id", "m.dropped_id")
		.innerJoin("auth.person as p", "p.person_id", "m.merged_by")
		.where(isSeenBy(viewer))
		.where(sql<boolean>`d.state_fips = any (${viewer.stateFips}::text[])`)
		.select(["m.merge_id as mergeId", "m.operation_id as operationId", "o.name", "d.name as droppedName"])
		.select(["p.display_name as personName", "m.merged_at as mergedAt", "m.undone_at as undoneAt"])
		.select(sql<boolean>`m.restore is not null`.as("canUndo"))
		.orderBy("m.merged_at", "desc")
		.orderBy("m.merge_id")
		.limit(50)
		.execute();
}
