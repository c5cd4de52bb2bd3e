import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { Words } from "#app/lib/words.ts";
import { type DraftCell, DraftFigure, ReleaseAudit, ReleaseMethod, ReleaseRules } from "./draft.ts";

export type DraftStatus = "queued" | "failed" | "audit_failed" | "audited" | "approved" | "rejected" | "superseded";

export type Draft = {
	releaseDraftId: string;
	surveyId: string;
	status: DraftStatus;
	season: number;
	title: Words;
	draftedBy: { personId: string; displayName: string };
	draftedAt: Date;
	computedAt: Date | null;
	decidedAt: Date | null;
	decisionNote: string | null;
	rules: ReleaseRules;
	method: ReleaseMethod | null;
	audit: ReleaseAudit | null;
	checksum: string | null;
	releaseId: string | null;
};

/** Starts a draft of a closed survey's release; an earlier one that waits is superseded. The figures are a job's work. */
export async function createDraft(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	rules: ReleaseRules,
): Promise<
	{ outcome: "drafted"; releaseDraftId: string } | { outcome: "not_found" | "not_closed" | "already_released" }
> {
	const survey = await trx
		.selectFrom("collect.survey as s")
		.select(["survey_id", "closed_at", "closes_at", "opened_at"])
		.where("survey_id", "=", surveyId)
		.where(inGrantedState(viewer))
		.forUpdate()
		.executeTakeFirst();
	if (!survey) return { outcome: "not_found" };
	// A survey that is still open could be drafted twice, and the difference would be one late answer.
	if (!survey.closed_at && survey.closes_at > new Date()) return { outcome: "not_closed" };
	const earlier = await trx
		.selectFrom("collect.release_draft")
		.select(["release_draft_id", "status"])
		.where("survey_id", "=", surveyId)
		.execute();
	if (earlier.some((draft) => draft.status === "approved")) return { outcome: "already_released" };
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "superseded" })
		.where("survey_id", "=", surveyId)
		.where("status", "in", ["queued", "failed", "audit_failed", "audited"])
		.execute();
	const { release_draft_id: releaseDraftId } = await trx
		.insertInto("collect.release_draft")
		.values({ survey_id: surveyId, rules: JSON.stringify(rules), drafted_by: viewer.personId })
		.returning("release_draft_id")
		.executeTakeFirstOrThrow();
	return { outcome: "drafted", releaseDraftId };
}

/** The newest draft of a survey, or undefined before the first. */
export async function findLatestDraft(trx: Trx, viewer: Associate, surveyId: string): Promise<Draft | undefined> {
	const row = await selectDrafts(trx)
		.where("d.survey_id", "=", surveyId)
		.where(inGrantedState(viewer))
		.orderBy("d.drafted_at", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && toDraft(row);
}

/** Drafts for the coordinator, those that wait for a decision first. */
export async function listDrafts(trx: Trx, _viewer: Coordinator): Promise<Draft[]> {
	const rows = await selectDrafts(trx)
		.where("d.status", "!=", "superseded")
		.orderBy(sql`d.status = 'audited'`, "desc")
		.orderBy("d.drafted_at", "desc")
		.limit(200)
		.execute();
	return rows.map(toDraft);
}

export async function findDraft(trx: Trx, _viewer: Coordinator, releaseDraftId: string): Promise<Draft | undefined> {
	const row = await selectDrafts(trx).where("d.release_draft_id", "=", releaseDraftId).executeTakeFirst();
	return row && toDraft(row);
}

/** Cells of a draft with their statuses and reasons, figures of shown cells only. */
export async function listDraftCells(trx: Trx, releaseDraftId: string): Promise<DraftCell[]> {
	const rows = await trx
		.selectFrom("collect.release_draft_cell")
		.select(["crop_key", "area_key", "status", "reasons", "respondents", "figures"])
		.where("release_draft_id", "=", releaseDraftId)
		.orderBy("crop_key")
		.orderBy("area_key")
		.execute();
	return rows.map((row) => ({
		cropKey: row.crop_key,
		areaKey: row.area_key,
		status: row.status as DraftCell["status"],
		reasons: row.reasons,
		respondents: row.respondents,
		figures: row.figures === null ? null : DraftFigure.array().parse(row.figures),
	}));
}

/** Sends a draft back with a note. A draft that no longer waits is left alone. */
export async function rejectDraft(trx: Trx, viewer: Coordinator, releaseDraftId: string, note: string) {
	const row = await trx
		.updateTable("collect.release_draft")
		.set({ status: "rejected", decided_by: viewer.personId, decided_at: new Date(), decision_note: note })
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "in", ["audited", "audit_failed"])
		.where("drafted_by", "!=", viewer.personId)
		.returning("release_draft_id")
		.executeTakeFirst();
	return row ? "rejected" : "not_waiting";
}

/** The one place that says whose surveys an associate can draft a release of; the survey goes by the alias `s`. */
function inGrantedState(viewer: Associate) {
	return sql<boolean>`exists (select from collect.survey_state st
		where st.survey_id = s.survey_id and st.state_fips = any (${viewer.stateFips}))`;
}

function selectDrafts(trx: Trx) {
	return trx
		.selectFrom("collect.release_draft as d")
		.innerJoin("collect.survey as s", "s.survey_id", "d.survey_id")
		.innerJoin("auth.person as p", "p.person_id", "d.drafted_by")
		.select([
			"d.release_draft_id",
			"d.survey_id",
			"d.status",
			"s.season",
			"s.title",
			"d.drafted_by",
			"p.display_name",
			"d.drafted_at",
			"d.computed_at",
			"d.decided_at",
			"d.decision_note",
			"d.rules",
			"d.method",
			"d.audit",
			"d.checksum",
			"d.release_id",
		]);
}
type DraftRow = Awaited<ReturnType<ReturnType<typeof selectDrafts>["executeTakeFirstOrThrow"]>>;

function toDraft(row: DraftRow): Draft {
	return {
		releaseDraftId: row.release_draft_id,
		surveyId: row.survey_id,
		status: row.status as DraftStatus,
		season: row.season,
		title: Words.parse(row.title),
		draftedBy: { personId: row.drafted_by, displayName: row.display_name },
		draftedAt: row.drafted_at,
		computedAt: row.computed_at,
		decidedAt: row.decided_at,
		decisionNote: row.decision_note,
		rules: ReleaseRules.parse(row.rules),
		method: row.method === null ? null : ReleaseMethod.parse(row.method),
		audit: row.audit === null ? null : ReleaseAudit.parse(row.audit),
		checksum: row.checksum,
		releaseId: row.release_id,
	};
}
