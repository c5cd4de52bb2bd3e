import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type ContactOutcome, type ContactWay, dispositionAfter, type NewContact } from "./contacts.schema.ts";
import { setDisposition } from "./dispositions.server.ts";
import type { Disposition } from "./frame-list.server.ts";
import { hasDraftedRelease } from "./survey-opening.server.ts";

/** Contacts made with an operation, newest first. The caller has found it. */
export async function listContacts(trx: Trx, operationId: string) {
	return trx
		.selectFrom("collect.contact as c")
		.innerJoin("auth.person as p", "p.person_id", "c.person_id")
		.where("c.operation_id", "=", operationId)
		.select(["c.contact_id as contactId", "c.made_at as madeAt", "c.note", "c.next_on as nextOn"])
		.select(sql<string | null>`to_char(c.next_time, 'HH24:MI')`.as("nextTime"))
		.select("p.display_name as personName")
		.select(sql<ContactWay>`c.way`.as("way"))
		.select(sql<ContactOutcome>`c.outcome`.as("outcome"))
		.orderBy("c.made_at", "desc")
		.orderBy("c.contact_id")
		.limit(100)
		.execute();
}
export type Contact = Awaited<ReturnType<typeof listContacts>>[number];

/**
 * Notes a contact with an operation of the viewer's states. What is noted stays, but for the viewer's own newest note
 * (`takeBackNote`): a further one puts it right. About a survey, an outcome that means a disposition sets it, until a release
 * of the survey is drafted.
 */
export async function noteContact(
	trx: Trx,
	viewer: Associate,
	operationId: string,
	{ surveyId, way, outcome, note, nextOn, nextTime }: NewContact,
): Promise<"noted" | "not_found"> {
	const seen = await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where("operation_id", "=", operationId)
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.where("status", "=", "active")
		.executeTakeFirst();
	if (!seen) return "not_found";
	if (surveyId !== undefined) {
		const noted = await noteDisposition(trx, viewer, { surveyId, operationId }, outcome);
		if (noted === "not_found") return noted;
	}
	await trx
		.insertInto("collect.contact")
		.values({
			operation_id: operationId,
			survey_id: surveyId ?? null,
			person_id: viewer.personId,
			way,
			outcome,
			note,
			next_on: nextOn ?? null,
			next_time: nextTime ?? null,
		})
		.execute();
	return "noted";
}

async function noteDisposition(
	trx: Trx,
	viewer: Associate,
	{ surveyId, operationId }: { surveyId: string; operationId: string },
	outcome: ContactOutcome,
): Promise<"noted" | "not_found"> {
	// Drafting a release waits for this, and this for the drafting: none is made of a frame that is changing.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	const asked = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where((eb) => eb("f.state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.select([
			sql<Disposition>`f.disposition`.as("disposition"),
			sql<boolean>`exists (select from collect.response r where r.survey_id = f.survey_id
				and r.operation_id = f.operation_id and r.withdrawn_at is not null)`.as("withdrawn"),
		])
		.forUpdate("f")
		.executeTakeFirst();
	if (!asked) return "not_found";
	const disposition = dispositionAfter(asked, outcome);
	if (disposition === asked.disposition || (await hasDraftedRelease(trx, surveyId))) return "noted";
	await setDisposition(trx, { surveyId, operationId }, disposition);
	return "noted";
}
