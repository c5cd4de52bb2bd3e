import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { conditionsOfAll, conditionsOfEach, lastWave, queueWave } from "./mail-waves.server.ts";
import { findSurvey } from "./surveys.server.ts";

/**
 * How many would get an invitation or a reminder now, in the viewer's states, and which wave that reminder would be.
 * A page sends the wave back with its button: pressed twice, the second finds the wave taken and sends nothing.
 * @param only of these operations alone.
 */
export async function countMailings(trx: Trx, viewer: Associate, surveyId: string, only?: string[]) {
	const { hasSent, isAwaited, isInvited, invitationWentOut, hasNoAddress } = conditionsOfAll(surveyId);
	const told = trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.$if(only !== undefined, (rows) => rows.where(sql<boolean>`f.operation_id = any (${only}::uuid[])`))
		.select([
			isAwaited.as("is_awaited"),
			isInvited.as("is_invited"),
			invitationWentOut.as("went_out"),
			sql<boolean>`(${hasNoAddress} and not ${hasSent})`.as("without_address"),
		])
		// Keeps each of them from being asked as often as it is counted by.
		.offset(0);
	const row = await trx
		.selectFrom(told.as("t"))
		.select([
			sql<number>`count(*) filter (where is_awaited and not is_invited)`.as("toInvite"),
			sql<number>`count(*) filter (where is_awaited and went_out)`.as("toRemind"),
			sql<number>`count(*) filter (where is_invited)`.as("invited"),
			sql<number>`count(*) filter (where without_address)`.as("withoutAddress"),
		])
		.executeTakeFirstOrThrow();
	return { ...row, reminderWave: (await lastWave(trx, surveyId, "reminder")) + 1 };
}

/** Of the same counts those that have somebody do something today, without going through who was invited and has answered. */
export async function countToWrite(trx: Trx, viewer: Associate, surveyId: string) {
	const inFrame = trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select(sql<number>`count(*)`.as("n"));
	const { isAwaited, isInvited, hasNoAddress, hasSent } = conditionsOfEach;
	const { n: toInvite } = await inFrame
		.where(isAwaited)
		.where(sql<boolean>`not ${isInvited}`)
		.executeTakeFirstOrThrow();
	const { n: withoutAddress } = await inFrame
		.where(hasNoAddress)
		.where(sql<boolean>`not ${hasSent}`)
		.executeTakeFirstOrThrow();
	return { toInvite, withoutAddress };
}

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
