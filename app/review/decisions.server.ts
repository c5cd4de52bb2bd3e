import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { answerDays } from "./edit-question.server.ts";
import type { Finding } from "./findings.server.ts";
import type { Act, Correction, Place } from "./reviewed-answers.ts";
import { addStep, type FindingEnd } from "./save-findings.server.ts";

/** Takes the survey and the response for writing: two who decide at once meet here, and growers who amend meanwhile. */
export async function lockForDecision(trx: Trx, surveyId: string, responseId: string): Promise<void> {
	// Drafting a release waits for this, and this for the drafting: none is made of facts that are being changed.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	await trx
		.selectFrom("collect.response")
		.select("response_id")
		.where("response_id", "=", responseId)
		.forUpdate()
		.execute();
}

type Ending = { outcome: Extract<FindingEnd, "confirmed" | "corrected" | "set_aside">; words: string };

/** Ends a finding that its caller holds and found open. */
export async function endFinding(
	trx: Trx,
	viewer: Associate,
	finding: Finding,
	{ outcome, words }: Ending,
	batchId: string | null = null,
): Promise<void> {
	const { findingId } = finding;
	await trx
		.updateTable("collect.edit_finding")
		.set({ outcome, closed_by: viewer.personId, closed_at: sql`now()`, version: sql`version + 1` })
		.where("edit_finding_id", "=", findingId)
		.execute();
	await addStep(trx, { findingId, step: outcome, personId: viewer.personId, words, batchId });
	await logDecision(trx, viewer, finding, outcome);
}

/** Opens a finding again that an associate had ended. */
export async function reopenFinding(trx: Trx, viewer: Associate, finding: Finding): Promise<void> {
	const { findingId } = finding;
	await trx
		.updateTable("collect.edit_finding")
		.set({ outcome: null, closed_by: null, closed_at: null, version: sql`version + 1` })
		.where("edit_finding_id", "=", findingId)
		.execute();
	await addStep(trx, { findingId, step: "reopened", personId: viewer.personId });
	await logDecision(trx, viewer, finding, "reopened");
}

/** Notes that a mail asks the grower about it. The link comes about when the mail goes out. */
export async function noteAsked(trx: Trx, viewer: Associate, finding: Finding, mailingId: string): Promise<void> {
	const { findingId } = finding;
	await trx
		.insertInto("collect.edit_question")
		.values({
			edit_finding_id: findingId,
			mailing_id: mailingId,
			asked_by: viewer.personId,
			expires_at: sql`now() + make_interval(days => ${answerDays})`,
		})
		.execute();
	await addStep(trx, { findingId, step: "asked", personId: viewer.personId });
	await logDecision(trx, viewer, finding, "asked");
}

export type NewCorrection = Place & {
	responseId: string;
	editFindingId: string | null;
	act: Act;
	was: Correction["was"];
	answer: Correction["answer"];
	reason: string;
};

/** Keeps what review puts in the place of an answer, beside all that it decided of it before. */
export async function addCorrection(trx: Trx, viewer: Associate, correction: NewCorrection): Promise<void> {
	const { was, answer } = correction;
	await trx
		.insertInto("collect.correction")
		.values({
			response_id: correction.responseId,
			question_key: correction.questionKey,
			planting_id: correction.plantingId,
			edit_finding_id: correction.editFindingId,
			act: correction.act,
			was: JSON.stringify({ kind: was.kind, value: was.value }),
			answer: answer && JSON.stringify(answer),
			reason: correction.reason,
			made_by: viewer.personId,
		})
		.execute();
}

/** The findings that were confirmed at once and still are, by whoever did that. */
export async function listBatch(trx: Trx, viewer: Associate, batchId: string): Promise<string[]> {
	const rows = await trx
		.selectFrom("collect.edit_finding_step as s")
		.innerJoin("collect.edit_finding as f", "f.edit_finding_id", "s.edit_finding_id")
		.where("s.batch_id", "=", batchId)
		.where("s.person_id", "=", viewer.personId)
		.where("f.outcome", "=", "confirmed")
		.where("f.closed_by", "=", viewer.personId)
		.orderBy("s.edit_finding_id")
		.select("s.edit_finding_id")
		.execute();
	return rows.map(({ edit_finding_id }) => edit_finding_id);
}

function logDecision(
	trx: Trx,
	viewer: Associate,
	{ findingId, stateFips, surveyId, responseId, operationId }: Finding,
	verb: Ending["outcome"] | "reopened" | "asked",
): Promise<void> {
	return logEvent(trx, {
		personId: viewer.personId,
		action: `finding.${verb}`,
		subjectKind: "edit_finding",
		subjectId: findingId,
		stateFips,
		detail: { surveyId, responseId, operationId },
	});
}
