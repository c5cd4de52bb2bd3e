import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type ContactOutcome, dispositionAfter } from "./contacts.schema.ts";
import { setDisposition } from "./dispositions.server.ts";
import type { Disposition } from "./frame-list.server.ts";
import { hasDraftedRelease } from "./survey-opening.server.ts";

type Place = { surveyId: string; operationId: string };

/** The newest note about a survey, where the viewer made it in the last hour: the one that can be taken back. */
export async function findOwnNote(trx: Trx, viewer: Associate, { surveyId, operationId }: Place) {
	const newest = await trx
		.selectFrom("collect.contact as c")
		.innerJoin("directory.operation as o", "o.operation_id", "c.operation_id")
		.where("c.operation_id", "=", operationId)
		.where("c.survey_id", "=", surveyId)
		.where("o.state_fips", "in", viewer.stateFips)
		.select(["c.contact_id as contactId", "c.person_id as personId", "o.name"])
		.select(sql<ContactOutcome>`c.outcome`.as("outcome"))
		.select(sql<boolean>`c.made_at > now() - interval '1 hour'`.as("isNew"))
		.orderBy("c.made_at", "desc")
		.orderBy("c.contact_id")
		.limit(1)
		.executeTakeFirst();
	return newest?.isNew && newest.personId === viewer.personId ? newest : undefined;
}

/**
 * Takes back the viewer's own newest note about a survey, as if it had not been made: the disposition is then what it is after
 * the notes before, until a release of the survey is drafted.
 */
export async function takeBackNote(trx: Trx, viewer: Associate, place: Place): Promise<"taken_back" | "stays"> {
	const { surveyId, operationId } = place;
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	await trx
		.selectFrom("collect.frame_operation")
		.select("operation_id")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.forUpdate()
		.execute();
	const note = await findOwnNote(trx, viewer, place);
	if (!note) return "stays";
	await trx.deleteFrom("collect.contact").where("contact_id", "=", note.contactId).execute();
	if (await hasDraftedRelease(trx, surveyId)) return "taken_back";
	const stood = await findStanding(trx, place);
	if (!stood || stood.withdrawn || stood.disposition === "complete") return "taken_back";
	const disposition = await replay(trx, place, stood.before);
	if (disposition !== stood.disposition) await setDisposition(trx, place, disposition);
	return "taken_back";
}

/** How an operation stands, and how it would without any note: begun, out of the mail's reach, or not reached. */
function findStanding(trx: Trx, { surveyId, operationId }: Place) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.select(sql<Disposition>`f.disposition`.as("disposition"))
		.select(sql<boolean>`r.withdrawn_at is not null`.as("withdrawn"))
		.select(
			sql<Disposition>`case when r.response_id is not null then 'partial'
				when (select m.failure from collect.mailing m where m.survey_id = f.survey_id
					and m.operation_id = f.operation_id order by m.queued_at desc, m.mailing_id desc limit 1) = 'returned'
				then 'undeliverable' else 'not_reached' end`.as("before"),
		)
		.executeTakeFirst();
}

async function replay(trx: Trx, { surveyId, operationId }: Place, before: Disposition): Promise<Disposition> {
	const notes = await trx
		.selectFrom("collect.contact")
		.where("operation_id", "=", operationId)
		.where("survey_id", "=", surveyId)
		.orderBy("made_at")
		.select(sql<ContactOutcome>`outcome`.as("outcome"))
		.execute();
	return notes.reduce(
		(disposition, { outcome }) => dispositionAfter({ disposition, withdrawn: false }, outcome),
		before,
	);
}
