import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Pin } from "#app/lib/geography/pin.ts";
import { findOwnOperation } from "./own-operation.server.ts";

export type CountyChoice = { countyFips: string; stateFips: string; name: string };

/** Where a grower's own operation lies, and the counties of the network in which it could. */
export async function findOwnPlace(trx: Trx, viewer: Grower, operationId: string) {
	const operation = await findOwnOperation(trx, viewer, operationId);
	if (!operation) return undefined;
	const pin: Pin | undefined = await trx
		.selectFrom("directory.operation_pin")
		.select(["longitude", "latitude"])
		.where("operation_id", "=", operationId)
		.executeTakeFirst();
	return { operation, pin: pin ?? null, counties: await listCounties(trx) };
}

/** The counties of the network's states, state by state. */
export async function listCounties(trx: Trx): Promise<CountyChoice[]> {
	return trx
		.selectFrom("directory.county as c")
		.innerJoin("directory.state as s", "s.state_fips", "c.state_fips")
		.select(["c.county_fips as countyFips", "c.state_fips as stateFips", "c.name"])
		.orderBy("s.name")
		.orderBy("c.name")
		.execute();
}

/**
 * Writes down where an operation lies. Another county moves it there, under the eyes of that state's associates; surveys
 * that have opened keep the county of their frozen frame.
 * @param pin where exactly, if that was told. A county chosen without one takes away a pin, which may lie elsewhere.
 */
export async function moveOperation(
	trx: Trx,
	viewer: Grower,
	operationId: string,
	{ countyFips, pin }: { countyFips: string; pin: Pin | null },
): Promise<"moved" | "stayed" | "not_found" | "unknown_county"> {
	const operation = await findOwnOperation(trx, viewer, operationId);
	if (!operation) return "not_found";
	const county = (await listCounties(trx)).find((known) => known.countyFips === countyFips);
	if (!county) return "unknown_county";
	if (pin) await writePin(trx, operationId, pin);
	else if (county.countyFips !== operation.countyFips) await removePin(trx, viewer, operationId);
	if (county.countyFips === operation.countyFips) return "stayed";
	await trx
		.updateTable("directory.operation")
		.set({ county_fips: county.countyFips, state_fips: county.stateFips, updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.execute();
	await logEvent(trx, {
		personId: viewer.person?.personId ?? null,
		action: "operation.moved",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: county.stateFips,
		detail: { from: operation.countyFips, to: county.countyFips },
	});
	return "moved";
}

/** Takes a pin away; the county stays. */
export async function removePin(trx: Trx, viewer: Grower, operationId: string): Promise<"removed" | "not_found"> {
	if (!(await findOwnOperation(trx, viewer, operationId))) return "not_found";
	await trx.deleteFrom("directory.operation_pin").where("operation_id", "=", operationId).execute();
	return "removed";
}

async function writePin(trx: Trx, operationId: string, { longitude, latitude }: Pin): Promise<void> {
	const place = { longitude, latitude };
	await trx
		.insertInto("directory.operation_pin")
		.values({ operation_id: operationId, ...place })
		.onConflict((conflict) => conflict.column("operation_id").doUpdateSet({ ...place, set_at: sql`now()` }))
		.execute();
}
