import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { LogAction } from "#app/auth/log-actions.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { replacePersonalLinks } from "./personal-link.server.ts";
import { findSurvey, isId } from "./surveys.server.ts";

type Kind = "invitation" | "reminder";

/**
 * How many would get an invitation or a reminder now, in the viewer's states, and which wave that reminder would be.
 * A page sends the wave back with its button: pressed twice, the second finds the wave taken and sends nothing.
 */
export async function countMailings(trx: Trx, viewer: Associate, surveyId: string) {
	const row = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select([
			sql<number>`count(*) filter (where ${invited} = 0 and ${awaited})`.as("toInvite"),
			sql<number>`count(*) filter (where ${invited} > 0 and ${awaited})`.as("toRemind"),
			sql<number>`count(*) filter (where ${invited} > 0)`.as("invited"),
			sql<number>`count(*) filter (where coalesce(o.email, '') = '' and o.left_at is null and not ${answered})`.as(
				"withoutAddress",
			),
		])
		.executeTakeFirstOrThrow();
	return { ...row, reminderWave: (await lastWave(trx, surveyId, "reminder")) + 1 };
}

const answered = sql`exists (select from collect.response r where r.survey_id = f.survey_id
	and r.operation_id = f.operation_id and r.submitted_at is not null)`;
/** Has an address, wants mail, has not answered, and has not been found to be out of the survey. */
const awaited = sql`(coalesce(o.email, '') <> '' and o.mail_wanted and not ${answered} and f.disposition in ('not_reached', 'partial'))`;
const invited = sql`(select count(*) from collect.mailing m where m.survey_id = f.survey_id
	and m.operation_id = f.operation_id and m.kind = 'invitation')`;

async function lastWave(trx: Trx, surveyId: string, kind: Kind, operationId?: string): Promise<number> {
	const row = await trx
		.selectFrom("collect.mailing")
		.where("survey_id", "=", surveyId)
		.where("kind", "=", kind)
		.$if(operationId !== undefined, (query) => query.where("operation_id", "=", operationId!))
		.select(sql<number>`coalesce(max(wave), 0)`.as("wave"))
		.executeTakeFirstOrThrow();
	return row.wave;
}

/** Queues the first invitation of everyone in the viewer's states who is awaited and has none yet. @returns how many. */
export async function sendInvitations(trx: Trx, viewer: Associate, surveyId: string) {
	return queueWave(trx, viewer, surveyId, "invitation", 1);
}

/**
 * Queues a reminder to everyone in the viewer's states who was invited and has not answered.
 * @param wave the wave the page counted: one that was sent already sends nothing.
 */
export async function sendReminders(trx: Trx, viewer: Associate, surveyId: string, wave: number) {
	const last = await lastWave(trx, surveyId, "reminder");
	if (!Number.isInteger(wave) || wave < 1 || wave > last + 1) return "not_found" as const;
	if (wave <= last) return { queued: 0 };
	return queueWave(trx, viewer, surveyId, "reminder", wave);
}

async function queueWave(trx: Trx, viewer: Associate, surveyId: string, kind: Kind, wave: number) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.state !== "open") return "not_open" as const;
	const mailings = await trx
		.insertInto("collect.mailing")
		.columns(["survey_id", "operation_id", "kind", "wave", "queued_by"])
		.expression((eb) =>
			eb
				.selectFrom("collect.frame_operation as f")
				.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
				.where("f.survey_id", "=", surveyId)
				.where("f.state_fips", "in", viewer.stateFips)
				.where(sql<boolean>`${awaited}`)
				.$if(kind === "reminder", (query) => query.where(sql<boolean>`${invited} > 0`))
				.select([
					"f.survey_id",
					"f.operation_id",
					sql<string>`${kind}::text`.as("kind"),
					sql<number>`${wave}::int`.as("wave"),
					sql<string>`${viewer.personId}::uuid`.as("queued_by"),
				]),
		)
		.onConflict((conflict) => conflict.constraint("mailing_once").doNothing())
		.returning("mailing_id")
		.execute();
	for (const mailing of mailings) await queueMail(trx, mailing.mailing_id);
	if (mailings.length > 0) {
		await note(trx, viewer, kind === "invitation" ? "survey.invited" : "survey.reminded", "survey", surveyId, {
			queued: mailings.length,
			wave,
		});
	}
	return { queued: mailings.length };
}

/**
 * Sends one operation a new personal link; links sent before stop working at once.
 * @param wave the wave the page counted for this operation: pressed twice, the second changes nothing.
 */
export async function sendNewLink(trx: Trx, viewer: Associate, surveyId: string, operationId: string, wave: number) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey || !isId(operationId)) return "not_found" as const;
	if (survey.state !== "open") return "not_open" as const;
	const operation = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select(["o.email", "o.mail_wanted", "o.name", "f.state_fips", sql<boolean>`${answered}`.as("answered")])
		.executeTakeFirst();
	if (!operation) return "not_found" as const;
	if (operation.answered) return "already_answered" as const;
	if (!operation.email) return "no_address" as const;
	if (!operation.mail_wanted) return "not_wanted" as const;
	const last = await lastWave(trx, surveyId, "invitation", operationId);
	if (!Number.isInteger(wave) || wave < 1 || wave > last + 1) return "not_found" as const;
	const mailing = await trx
		.insertInto("collect.mailing")
		.values({ survey_id: surveyId, operation_id: operationId, kind: "invitation", wave, queued_by: viewer.personId })
		.onConflict((conflict) => conflict.constraint("mailing_once").doNothing())
		.returning("mailing_id")
		.executeTakeFirst();
	if (!mailing) return { queued: 0, name: operation.name };
	await replacePersonalLinks(trx, { surveyId, operationId });
	// The address may have been mended since a mail came back, so the operation is within reach again.
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "not_reached", disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("disposition", "=", "undeliverable")
		.execute();
	await queueMail(trx, mailing.mailing_id);
	await note(trx, viewer, "survey.link_replaced", "operation", operationId, { surveyId }, operation.state_fips);
	return { queued: 1, name: operation.name };
}

function queueMail(trx: Trx, mailingId: string): Promise<void> {
	return queueJob(trx, "send_mail", { mailingId }, { jobKey: `send_mail:${mailingId}` });
}

function note(
	trx: Trx,
	viewer: Associate,
	action: LogAction,
	subjectKind: string,
	subjectId: string,
	detail: Record<string, unknown>,
	stateFips?: string,
) {
	return logEvent(trx, { personId: viewer.personId, action, subjectKind, subjectId, detail, stateFips });
}
