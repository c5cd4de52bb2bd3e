import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { lastWave, mailConditions, queueWave } from "./mail-waves.server.ts";
import { findSurvey } from "./surveys.server.ts";

/**
 * How many would get an invitation or a reminder now, in the viewer's states, and which wave that reminder would be.
 * A page sends the wave back with its button: pressed twice, the second finds the wave taken and sends nothing.
 * @param only of these operations alone.
 */
export async function countMailings(trx: Trx, viewer: Associate, surveyId: string, only?: string[]) {
	const row = await inFrame(trx, viewer, surveyId)
		.$if(only !== undefined, (rows) => rows.where(sql<boolean>`f.operation_id = any (${only}::uuid[])`))
		.where(isAwaited)
		.select([
			sql<number>`count(*) filter (where ${isUninvited})`.as("toInvite"),
			sql<number>`count(*) filter (where ${wentOut})`.as("toRemind"),
		])
		.executeTakeFirstOrThrow();
	return { ...row, reminderWave: (await lastWave(trx, surveyId, "reminder")) + 1 };
}

/** How many have an invitation, on its way or sent and not given up. */
export async function countInvited(trx: Trx, viewer: Associate, surveyId: string): Promise<number> {
	const ofFrame = trx
		.selectFrom("collect.frame_operation as f")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where(isUninvited);
	// Those without one are fewer, once invitations went out, and all together are counted already.
	const { n } = await trx
		.selectFrom("collect.frame_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", "all")
		.where("state_fips", "in", viewer.stateFips)
		.select((eb) => [
			sql<number>`coalesce(sum(operations), 0)::int - ${ofFrame.select(eb.fn.countAll().as("n"))}`.as("n"),
		])
		.executeTakeFirstOrThrow();
	return n;
}

/** Of those who have not answered, how many wait for a first mail, and how many cannot get one. */
export async function countToWrite(trx: Trx, viewer: Associate, surveyId: string) {
	const toInvite = await inFrame(trx, viewer, surveyId)
		.where(isAwaited)
		.where(isUninvited)
		.select(count)
		.executeTakeFirstOrThrow();
	return { toInvite: toInvite.n, withoutAddress: await countWithoutAddress(trx, viewer, surveyId) };
}

/** How many have not answered and cannot be written to by mail. */
export async function countWithoutAddress(trx: Trx, viewer: Associate, surveyId: string): Promise<number> {
	const { n } = await inFrame(trx, viewer, surveyId)
		.where(hasNoAddress)
		.where(isIncomplete)
		.select(count)
		.executeTakeFirstOrThrow();
	return n;
}

const { isAwaited, isUninvited, wentOut, isIncomplete, hasNoAddress } = mailConditions;
const count = sql<number>`count(*)`.as("n");

const inFrame = (trx: Trx, viewer: Associate, surveyId: string) =>
	trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips);

/** Queues an invitation to everyone in the viewer's states who is awaited and has none that went out or still waits. */
export async function sendInvitations(trx: Trx, viewer: Associate, surveyId: string, only?: string[]) {
	return queueByHand(trx, viewer, surveyId, "invitation", 1, only);
}

/**
 * Queues a reminder to everyone in the viewer's states who was invited and has not answered. It stands for the reminder
 * of that wave which a time is set for: then that one goes to the others alone.
 * @param wave the wave the page counted: one that was sent already sends nothing.
 */
export async function sendReminders(trx: Trx, viewer: Associate, surveyId: string, wave: number, only?: string[]) {
	const last = await lastWave(trx, surveyId, "reminder");
	if (!Number.isInteger(wave) || wave < 1 || wave > last + 1) return "not_found" as const;
	if (wave <= last) return { queued: 0 };
	return queueByHand(trx, viewer, surveyId, "reminder", wave, only);
}

async function queueByHand(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	kind: "invitation" | "reminder",
	wave: number,
	only?: string[],
) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.state !== "open") return "not_open" as const;
	const { personId, stateFips } = viewer;
	const queued = await queueWave(trx, { surveyId, kind, wave, states: stateFips, queuedBy: personId, only });
	if (queued > 0) {
		const action = kind === "invitation" ? "survey.invited" : "survey.reminded";
		const detail = { queued, wave };
		await logEvent(trx, { personId, action, subjectKind: "survey", subjectId: surveyId, detail });
	}
	return { queued };
}
