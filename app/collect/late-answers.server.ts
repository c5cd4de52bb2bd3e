import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countIn } from "./submission.server.ts";
import { hasDraftedRelease } from "./survey-opening.server.ts";
import { isId } from "./surveys.server.ts";

/** What was sent in after the closing: the newest late version of each response, with what was decided; what waits first. */
export async function listLateAnswers(trx: Trx, viewer: Associate, surveyId: string) {
	const rows = await trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.submission as b", "b.response_id", "r.response_id")
		.innerJoin("directory.operation as o", "o.operation_id", "r.operation_id")
		.innerJoin("directory.state as z", "z.state_fips", "r.state_fips")
		.leftJoin("collect.late_decision as d", (join) =>
			join.onRef("d.response_id", "=", "b.response_id").onRef("d.version", "=", "b.version"),
		)
		.leftJoin("auth.person as p", "p.person_id", "d.decided_by")
		.where("r.survey_id", "=", surveyId)
		.where("r.state_fips", "in", viewer.stateFips)
		.where("b.late", "=", true)
		.where("b.withdrawn_at", "is", null)
		.distinctOn("r.response_id")
		.orderBy("r.response_id")
		.orderBy("b.version", "desc")
		.limit(500)
		.select(["r.response_id as responseId", "o.name", "b.version", "b.submitted_at as sentAt"])
		.select(["d.taken", "d.reason", "d.decided_at as decidedAt", "p.display_name as decidedBy"])
		.select("z.time_zone as timeZone")
		.select(
			sql<boolean>`exists (select from collect.submission e where e.response_id = r.response_id
			and not e.late and e.withdrawn_at is null and e.version < b.version)`.as("countsAlready"),
		)
		.execute();
	const isDecided = ({ taken }: (typeof rows)[number]) => (taken === null ? 0 : 1);
	return rows.toSorted((a, b) => isDecided(a) - isDecided(b) || b.sentAt.getTime() - a.sentAt.getTime());
}
export type LateAnswer = Awaited<ReturnType<typeof listLateAnswers>>[number];

/** Surveys with late answers of the viewer's states that wait for a decision, while one can still be made. */
export async function countLateWaiting(trx: Trx, viewer: Associate): Promise<{ surveyId: string; waiting: number }[]> {
	return trx
		.selectFrom("collect.response as r")
		.where("r.state_fips", "in", viewer.stateFips)
		.where("r.late_at", "is not", null)
		.where(
			sql<boolean>`not exists (select from collect.late_decision d
				where d.response_id = r.response_id and d.version = r.submitted_version)`,
		)
		.where(
			sql<boolean>`not exists (select from collect.release_draft x where x.survey_id = r.survey_id
				and x.status in ('queued', 'audited', 'scheduled', 'approved'))`,
		)
		.groupBy("r.survey_id")
		.orderBy("r.survey_id")
		.select(["r.survey_id as surveyId", sql<number>`count(*)::int`.as("waiting")])
		.execute();
}

export type LateChoice = { surveyId: string; responseId: string; version: number; take: boolean; reason: string };
export type LateDecided = "taken" | "left" | "already_decided" | "already_drafted" | "not_found";

/**
 * Takes in what came after the closing, or leaves it. Taken in, its answers become a version that counts, beside the late one
 * that stays as it came. Said once of each version; a newer one from the grower waits anew. Nothing is decided once a
 * release is drafted: an answer that came after would tell itself by the difference.
 */
export async function decideLate(trx: Trx, viewer: Associate, choice: LateChoice): Promise<LateDecided> {
	const { surveyId, responseId, version, take, reason } = choice;
	if (!isId(surveyId) || !isId(responseId)) return "not_found";
	// Drafting a release waits for this, and this for the drafting.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	const response = await trx
		.selectFrom("collect.response")
		.where("response_id", "=", responseId)
		.where("survey_id", "=", surveyId)
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.select(["operation_id", "state_fips", "late_at", "submitted_version"])
		.forUpdate()
		.executeTakeFirst();
	if (!response) return "not_found";
	if (await hasDraftedRelease(trx, surveyId)) return "already_drafted";
	if (response.late_at === null || response.submitted_version !== version) return "already_decided";
	const decided = await trx
		.insertInto("collect.late_decision")
		.values({ response_id: responseId, version, taken: take, reason, decided_by: viewer.personId })
		.onConflict((conflict) => conflict.columns(["response_id", "version"]).doNothing())
		.returning("version")
		.executeTakeFirst();
	if (!decided) return "already_decided";
	if (take) await takeIn(trx, { surveyId, operationId: response.operation_id, responseId, version });
	await logEvent(trx, {
		personId: viewer.personId,
		action: take ? "response.taken_in" : "response.left_out",
		subjectKind: "response",
		subjectId: responseId,
		stateFips: response.state_fips,
		detail: { surveyId, operationId: response.operation_id, version },
	});
	return take ? "taken" : "left";
}

type Late = { surveyId: string; operationId: string; responseId: string; version: number };

async function takeIn(trx: Trx, { surveyId, operationId, responseId, version }: Late): Promise<void> {
	await trx
		.insertInto("collect.submission")
		.columns(["response_id", "version", "answers", "mode", "entered_by"])
		.expression((eb) =>
			eb
				.selectFrom("collect.submission")
				.where("response_id", "=", responseId)
				.where("version", "=", version)
				.select(["response_id", sql<number>`version + 1`.as("version"), "answers", "mode", "entered_by"]),
		)
		.execute();
	await trx
		.updateTable("collect.response")
		.set({
			submitted_version: version + 1,
			first_submitted_at: sql`coalesce(first_submitted_at, late_at)`,
			submitted_at: sql`late_at`,
			late_at: null,
		})
		.where("response_id", "=", responseId)
		.execute();
	await countIn(trx, { surveyId, operationId }, responseId);
}
