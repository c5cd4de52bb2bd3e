import { randomUUID } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findCounty } from "./areas.server.ts";
import type { OperationEdit } from "./edit-operation.server.ts";
import { likelyTo } from "./merging/likely.ts";
import { isSeenBy } from "./operations.server.ts";
import { addPlanting, type NewPlanting } from "./plantings.server.ts";

export type NewOperation = OperationEdit & {
	email: string | null;
	/** The owner's name, where it is nobody whose operations are known. */
	ownerName: string;
	/** An owner who is known already. */
	ownerId: string | null;
	plantings: NewPlanting[];
};

/** So many look-alikes are shown; the likeliest come first. */
const mostHints = 5;

/** What an associate should look at before saving: growers that may be the same, and owners of the same name. */
export async function findLookAlikes(trx: Trx, viewer: Associate, input: Omit<NewOperation, "plantings">) {
	const digits = (input.phone ?? "").replace(/\D/g, "").slice(-10);
	const near = await trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where(isSeenBy(viewer))
		.where("o.status", "=", "active")
		.where(
			sql<boolean>`(o.county_fips = ${input.countyFips} or lower(o.email) = lower(${input.email})
				or (length(${digits}) >= 7 and right(regexp_replace(o.phone, '\\D', '', 'g'), 10) = ${digits}))`,
		)
		.select(["o.operation_id as operationId", "o.name", "o.contact_name as contactName", "o.email", "o.phone"])
		.select(["o.county_fips as countyFips", "c.name as countyName", "s.postal as statePostal"])
		.execute();
	const owners = await trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.owner as w", "w.owner_id", "o.owner_id")
		.where(isSeenBy(viewer))
		.where("o.status", "=", "active")
		.where(sql<boolean>`lower(w.name) = lower(${input.ownerName})`)
		.groupBy(["w.owner_id", "w.name"])
		.select(["w.owner_id as ownerId", "w.name", sql<string[]>`array_agg(o.name order by o.name)`.as("operations")])
		.orderBy("w.owner_id")
		.limit(mostHints)
		.execute();
	return { likely: likelyTo(input, near).slice(0, mostHints), owners };
}

/**
 * Writes down an operation with its plantings, of a known owner or of a new one. A county outside the viewer's states is as
 * unknown as one that is not, and so is an owner none of whose operations the viewer sees.
 */
export async function createOperation(
	trx: Trx,
	viewer: Associate,
	input: NewOperation,
): Promise<{ operationId: string } | "unknown_county" | "unknown_owner"> {
	const county = await findCounty(trx, input.countyFips);
	if (!county || !viewer.stateFips.includes(county.state_fips)) return "unknown_county";
	if (input.ownerId && !(await seesOwner(trx, viewer, input.ownerId))) return "unknown_owner";
	// Ids are made here: row-level security shows an owner only once its operation is there, so nothing can be returned.
	const [ownerId, operationId] = [input.ownerId ?? randomUUID(), randomUUID()];
	if (!input.ownerId)
		await trx.insertInto("directory.owner").values({ owner_id: ownerId, name: input.ownerName }).execute();
	await trx
		.insertInto("directory.operation")
		.values({
			operation_id: operationId,
			owner_id: ownerId,
			name: input.name,
			county_fips: county.county_fips,
			state_fips: county.state_fips,
			contact_name: input.contactName,
			email: input.email,
			phone: input.phone,
			language: input.language,
			mass_unit: input.massUnit,
		})
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "operation.added",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: county.state_fips,
	});
	for (const planting of input.plantings) await addPlanting(trx, viewer, operationId, planting);
	return { operationId };
}

async function seesOwner(trx: Trx, viewer: Associate, ownerId: string): Promise<boolean> {
	const one = await trx
		.selectFrom("directory.operation as o")
		.where(isSeenBy(viewer))
		.where("o.owner_id", "=", ownerId)
		.select("o.operation_id")
		.limit(1)
		.executeTakeFirst();
	return one !== undefined;
}
