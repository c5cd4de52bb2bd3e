import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";

type Left = { surveyId: string; disposition: string };
const isOpen = sql<boolean>`s.closed_at is null and s.closes_at > now()`;

/**
 * Why two operations cannot be made one just now: in an open survey the one to be dropped has begun to answer, or is asked
 * and the other is not, so that the survey would lose a grower.
 */
export async function findMergeHindrance(trx: Trx, keptId: string, droppedId: string) {
	const { rows } = await sql<{ answered: boolean; alone: boolean }>`select
			exists (select from collect.response r where r.survey_id = f.survey_id and r.operation_id = f.operation_id) as answered,
			not exists (select from collect.frame_operation k where k.survey_id = f.survey_id and k.operation_id = ${keptId}) as alone
		from collect.frame_operation f join collect.survey s using (survey_id)
		where f.operation_id = ${droppedId} and ${isOpen}`.execute(trx);
	if (rows.some(({ answered }) => answered)) return "answers_open" as const;
	return rows.some(({ alone }) => alone) ? ("asked_alone" as const) : undefined;
}

/** In open surveys a duplicate is not eligible: its twin answers. @returns what it was, for the way back. */
export async function leaveOpenFrames(trx: Trx, droppedId: string): Promise<Left[]> {
	const frames = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.where("f.operation_id", "=", droppedId)
		.where(isOpen)
		.select(["f.survey_id as surveyId", "f.disposition"])
		.execute();
	for (const { surveyId } of frames) await setWhileOpen(trx, { surveyId, disposition: "not_eligible" }, droppedId);
	return frames;
}

/** Puts the duplicate back where it was asked, as it was, where the survey is still open. */
export async function rejoinFrames(trx: Trx, droppedId: string, left: Left[]): Promise<void> {
	for (const frame of left) await setWhileOpen(trx, frame, droppedId);
}

/** Whether surveys have come to rest on a merge: one opened since asks the one that was kept, or it told of what went over. */
export async function restsOnMerge(
	trx: Trx,
	{ keptId, mergedAt, plantingIds }: { keptId: string; mergedAt: Date; plantingIds: string[] },
): Promise<boolean> {
	const { rows } = await sql<{ rests: boolean }>`select exists (select from collect.frame_operation f
			join collect.survey s using (survey_id) where f.operation_id = ${keptId} and s.opened_at >= ${mergedAt})
		or exists (select from collect.answer a join collect.response r using (response_id)
			where r.operation_id = ${keptId} and a.planting_id = any (${plantingIds}::uuid[])) as rests`.execute(trx);
	return rows[0]?.rests ?? false;
}

async function setWhileOpen(trx: Trx, { surveyId, disposition }: Left, operationId: string): Promise<void> {
	await trx
		.updateTable("collect.frame_operation as f")
		.from("collect.survey as s")
		.whereRef("s.survey_id", "=", "f.survey_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where(isOpen)
		.set({ disposition, disposition_at: sql`now()` })
		.execute();
}
