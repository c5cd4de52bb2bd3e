import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { setScope } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { LogAction } from "#app/auth/log-actions.ts";
import { sizeClassOf, stratumKeyOf } from "./frame.ts";
import { planReminders, type SetAlarm } from "./reminders.server.ts";
import { findSurvey } from "./surveys.server.ts";

/**
 * Opens a draft once and freezes its frame: every active operation of the survey's states with a standing planting of its
 * crops, with the stratum of that moment. A second opening changes nothing. The opener must hold every state of the
 * survey, since row-level security would otherwise leave the others' growers out of the frame without a word.
 * @param setAlarm how the reminders' alarms are set; by the queue unless told otherwise.
 */
export async function openSurvey(trx: Trx, viewer: Associate, surveyId: string, setAlarm?: SetAlarm) {
	const survey = await lockSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.openedAt) return "already_open" as const;
	if (survey.statesNotHeld.length > 0) return "states_not_held" as const;
	if (survey.closesAt <= new Date()) return "closing_past" as const;
	await endRehearsal(trx, surveyId);
	const operations = await freezeFrame(trx, survey);
	if (operations === 0) return "nobody_in_frame" as const;
	await trx
		.updateTable("collect.survey")
		.set({ opened_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.execute();
	await planReminders(trx, survey, viewer.personId, { setAlarm });
	await note(trx, viewer, "survey.opened", surveyId, { operations });
	return "opened" as const;
}

/** Closes an open survey for good. A second close changes nothing. */
export async function closeSurvey(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await lockSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (!survey.openedAt) return "not_open" as const;
	if (survey.closedAt) return "already_closed" as const;
	if (!survey.mayManage) return "states_not_held" as const;
	await trx
		.updateTable("collect.survey")
		.set({ closed_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.execute();
	await note(trx, viewer, "survey.closed", surveyId, {});
	return "closed" as const;
}

/**
 * Moves the closing time of a survey that nobody closed by hand; links that still work live on until then. Once its
 * release is drafted it stays closed: an answer that came after would tell itself by the difference.
 */
export async function extendSurvey(trx: Trx, viewer: Associate, surveyId: string, closesAt: Date) {
	const survey = await lockSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.closedAt) return "already_closed" as const;
	if (!survey.mayManage) return "states_not_held" as const;
	if (closesAt.getTime() === survey.closesAt.getTime()) return "unchanged" as const;
	if (await hasDraftedRelease(trx, surveyId)) return "already_drafted" as const;
	await trx.updateTable("collect.survey").set({ closes_at: closesAt }).where("survey_id", "=", surveyId).execute();
	// Links of all the survey's states follow, also of those that the associate who made the survey no longer holds.
	await setScope(trx, { kind: "network" });
	await trx
		.updateTable("collect.personal_link")
		.set({ expires_at: closesAt })
		.where("survey_id", "=", surveyId)
		.where("replaced_at", "is", null)
		.execute();
	await setScope(trx, { kind: "desk", stateFips: viewer.stateFips });
	await note(trx, viewer, "survey.extended", surveyId, {
		from: survey.closesAt.toISOString(),
		to: closesAt.toISOString(),
	});
	return "extended" as const;
}

/** A draft that failed or was sent back holds nothing up: it is made anew after the survey has closed again. */
export async function hasDraftedRelease(trx: Trx, surveyId: string): Promise<boolean> {
	const drafts = await trx
		.selectFrom("collect.release_draft")
		.select("release_draft_id")
		.where("survey_id", "=", surveyId)
		.where("status", "in", ["queued", "audited", "scheduled", "approved"])
		.limit(1)
		.execute();
	return drafts.length > 0;
}

/** Two presses at once meet here: the second waits and then reads what the first did. */
async function lockSurvey(trx: Trx, viewer: Associate, surveyId: string) {
	const seen = await findSurvey(trx, viewer, surveyId);
	if (!seen) return undefined;
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forUpdate().execute();
	return findSurvey(trx, viewer, surveyId);
}

/** Deletes the rehearsal of a survey with all that came of it, if there is one. The caller has asked whether it may. */
export async function endRehearsal(trx: Trx, surveyId: string): Promise<void> {
	await sql`select collect.discard_rehearsal(r.id) from collect.rehearsal_of(${surveyId}::uuid) as r (id)
		where r.id is not null`.execute(trx);
}

type FrameOf = { surveyId: string; stateFips: string[]; cropKeys: string[]; rehearsalId?: string };

/** Freezes a frame of the directory's operations, or of those invented for a rehearsal; never of both. */
export async function freezeFrame(trx: Trx, { surveyId, stateFips, cropKeys, rehearsalId }: FrameOf): Promise<number> {
	const rows = await trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.planting as p", "p.operation_id", "o.operation_id")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where("o.status", "=", "active")
		.where("o.rehearsal_id", rehearsalId ? "=" : "is", rehearsalId ?? null)
		.where("o.state_fips", "in", stateFips)
		.where("p.crop_key", "in", cropKeys)
		.where("p.removed_on", "is", null)
		.groupBy(["o.operation_id", "p.crop_key", "s.postal"])
		.select([
			"o.operation_id",
			"o.owner_id",
			"o.county_fips",
			"o.state_fips",
			"s.postal",
			"p.crop_key",
			sql<number>`sum(p.bearing_trees)::int`.as("bearing_trees"),
		])
		.execute();
	const byOperation = new Map<string, typeof rows>();
	for (const row of rows) byOperation.set(row.operation_id, [...(byOperation.get(row.operation_id) ?? []), row]);
	const frame = [...byOperation.entries()].map(([operationId, crops]) => {
		const sizeClass = sizeClassOf(crops.reduce((trees, crop) => trees + crop.bearing_trees, 0));
		const { owner_id, county_fips, state_fips, postal } = crops[0]!;
		return {
			survey_id: surveyId,
			operation_id: operationId,
			owner_id,
			county_fips,
			state_fips,
			size_class: sizeClass,
			stratum_key: stratumKeyOf(postal, sizeClass),
		};
	});
	const crops = rows.map(({ operation_id, crop_key, bearing_trees }) => ({
		survey_id: surveyId,
		operation_id,
		crop_key,
		bearing_trees,
	}));
	for (const part of inParts(frame)) await trx.insertInto("collect.frame_operation").values(part).execute();
	for (const part of inParts(crops)) await trx.insertInto("collect.frame_crop").values(part).execute();
	// The page of a large frame is opened next, and the planner would take it for as small as it was.
	if (frame.length > 1_000) await sql`select collect.know_frames()`.execute(trx);
	return frame.length;
}

/** PostgreSQL takes at most 65,535 parameters a statement. */
function inParts<T>(rows: T[], size = 2_000): T[][] {
	return Array.from({ length: Math.ceil(rows.length / size) }, (_, part) => rows.slice(part * size, (part + 1) * size));
}

function note(trx: Trx, viewer: Associate, action: LogAction, surveyId: string, detail: Record<string, unknown>) {
	return logEvent(trx, { personId: viewer.personId, action, subjectKind: "survey", subjectId: surveyId, detail });
}
