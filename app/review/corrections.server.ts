import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Act, Correction } from "./reviewed-answers.ts";

/** A decision as it was kept, with who made it. */
export type KeptCorrection = Correction & {
	/** Rises with time, over all responses. */
	number: number;
	editFindingId: string | null;
	reason: string;
	madeBy: string;
	madeAt: Date;
};

/** The newest decision about each place of a response, which its caller has narrowed. */
export async function listCorrections(trx: Trx, responseId: string): Promise<KeptCorrection[]> {
	return selectCorrections(trx)
		.where("c.response_id", "=", responseId)
		.distinctOn(["c.question_key", "c.planting_id"])
		.orderBy("c.question_key")
		.orderBy("c.planting_id")
		.orderBy("c.number", "desc")
		.execute();
}

/** Every decision about a response, newest first. */
export async function listCorrectionHistory(trx: Trx, responseId: string): Promise<KeptCorrection[]> {
	return selectCorrections(trx).where("c.response_id", "=", responseId).orderBy("c.number", "desc").execute();
}

/** Whether the newest decision about an answer is the viewer's own, and one that the viewer's page did not know of. */
export async function decidedElsewhere(
	trx: Trx,
	viewer: Associate,
	{
		responseId,
		questionKey,
		plantingId,
		seen,
	}: { responseId: string; questionKey: string; plantingId: string | null; seen: number },
): Promise<boolean> {
	const newest = await trx
		.selectFrom("collect.correction")
		.where("response_id", "=", responseId)
		.where("question_key", "=", questionKey)
		.where("planting_id", "is not distinct from", plantingId)
		.orderBy("number", "desc")
		.limit(1)
		.select(["number", "made_by"])
		.executeTakeFirst();
	return newest !== undefined && newest.number !== seen && newest.made_by === viewer.personId;
}

function selectCorrections(trx: Trx) {
	return trx
		.selectFrom("collect.correction as c")
		.leftJoin("auth.person as p", "p.person_id", "c.made_by")
		.select([
			"c.number",
			"c.question_key as questionKey",
			"c.planting_id as plantingId",
			"c.edit_finding_id as editFindingId",
			"c.reason",
			"c.made_at as madeAt",
			sql<Act>`c.act`.as("act"),
			sql<Correction["was"]>`c.was`.as("was"),
			sql<Correction["answer"]>`c.answer`.as("answer"),
			sql<string>`coalesce(p.display_name, '')`.as("madeBy"),
		]);
}
