import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import { underScope, type Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { type AnswerPlace, findPlace } from "./answer-place.server.ts";
import { erasePhotos } from "./photo-rows.server.ts";

export type Withdrawn = "withdrawn" | "already_withdrawn" | "not_found" | "not_sent" | "released";

/**
 * Takes back what an operation sent in, as long as no release rests on it: it counts in no figure from then on, and the
 * operation has refused until it sends in again. What was sent stays as a record that only the grower still reads; photos
 * go for good.
 */
export async function withdrawAnswer(trx: Trx, viewer: Grower, place: AnswerPlace): Promise<Withdrawn> {
	if (!(await findPlace(trx, viewer, place))) return "not_found";
	const { surveyId, operationId } = place;
	// Drafting a release waits for this, and this for the drafting: none is made of facts that are being taken away.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	const response = await trx
		.selectFrom("collect.response")
		.select(["response_id", "state_fips", "submitted_at", "late_at", "withdrawn_at"])
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.forUpdate()
		.executeTakeFirst();
	if (!response?.submitted_at && !response?.late_at) return response?.withdrawn_at ? "already_withdrawn" : "not_sent";
	// What came late counts in no draft and no release.
	const isCounted = response.submitted_at !== null;
	if (isCounted && (await underScope(trx, { kind: "network" }, () => endDrafts(trx, surveyId))) === "released")
		return "released";

	await markWithdrawn(trx, response.response_id);
	await erasePhotos(trx, response.response_id);
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "refused", disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.execute();
	await trx
		.deleteFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.execute();
	await logEvent(trx, {
		personId: viewer.person?.personId ?? null,
		action: "response.withdrawn",
		subjectKind: "response",
		subjectId: response.response_id,
		stateFips: response.state_fips,
		detail: { surveyId, operationId },
	});
	return "withdrawn";
}

/** Of these surveys, those whose figures are published: their answers can no longer be withdrawn. */
export async function listReleased(trx: Trx, surveyIds: string[]): Promise<Set<string>> {
	const rows = await underScope(trx, { kind: "network" }, () =>
		trx
			.selectFrom("collect.release_draft")
			.select("survey_id")
			.where((eb) => eb("survey_id", "=", eb.fn.any(eb.val(surveyIds))))
			.where("status", "=", "approved")
			.execute(),
	);
	return new Set(rows.map(({ survey_id }) => survey_id));
}

/** A draft that waits counts the answer, so it has to be made anew; locked, so that none is published meanwhile. */
async function endDrafts(trx: Trx, surveyId: string): Promise<"ended" | "released"> {
	const drafts = await trx
		.selectFrom("collect.release_draft")
		.select("status")
		.where("survey_id", "=", surveyId)
		.forUpdate()
		.execute();
	if (drafts.some(({ status }) => status === "approved")) return "released";
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "superseded" })
		.where("survey_id", "=", surveyId)
		.where("status", "in", ["queued", "failed", "audit_failed", "audited", "scheduled"])
		.execute();
	return "ended";
}

async function markWithdrawn(trx: Trx, responseId: string): Promise<void> {
	await trx
		.updateTable("collect.submission")
		.set({ withdrawn_at: sql`now()` })
		.where("response_id", "=", responseId)
		.where("withdrawn_at", "is", null)
		.execute();
	await trx
		.updateTable("collect.response")
		.set({ withdrawn_at: sql`now()`, receipt_code: null, first_submitted_at: null, submitted_at: null, late_at: null })
		.where("response_id", "=", responseId)
		.execute();
}
