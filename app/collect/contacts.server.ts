import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { ContactOutcome, ContactWay, NewContact } from "./contacts.schema.ts";

/** Contacts made with an operation, newest first. The caller has found it. */
export async function listContacts(trx: Trx, operationId: string) {
	return trx
		.selectFrom("collect.contact as c")
		.innerJoin("auth.person as p", "p.person_id", "c.person_id")
		.where("c.operation_id", "=", operationId)
		.select(["c.contact_id as contactId", "c.made_at as madeAt", "c.note", "c.next_on as nextOn"])
		.select("p.display_name as personName")
		.select(sql<ContactWay>`c.way`.as("way"))
		.select(sql<ContactOutcome>`c.outcome`.as("outcome"))
		.orderBy("c.made_at", "desc")
		.orderBy("c.contact_id")
		.limit(100)
		.execute();
}
export type Contact = Awaited<ReturnType<typeof listContacts>>[number];

/** Notes a contact with an operation of the viewer's states. What is noted stays: a further note puts it right. */
export async function noteContact(
	trx: Trx,
	viewer: Associate,
	operationId: string,
	{ way, outcome, note, nextOn }: NewContact,
): Promise<"noted" | "not_found"> {
	const seen = await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where("operation_id", "=", operationId)
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.where("status", "=", "active")
		.executeTakeFirst();
	if (!seen) return "not_found";
	await trx
		.insertInto("collect.contact")
		.values({ operation_id: operationId, person_id: viewer.personId, way, outcome, note, next_on: nextOn ?? null })
		.execute();
	return "noted";
}
