import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { Words } from "#app/lib/words.ts";
import { type DraftCell, DraftFigure, DraftProgress, ReleaseAudit, ReleaseMethod, ReleaseRules } from "./draft.ts";

export type DraftStatus =
	| "queued"
	| "failed"
	| "audit_failed"
	| "audited"
	/** Approved, and waiting for its minute. */
	| "scheduled"
	/** Published. */
	| "approved"
	| "rejected"
	| "superseded"
	/** Stopped by an associate while it was being made. */
	| "cancelled";

/** Drafts of which a newer one, or an answer that is taken back, takes the place. */
export const waitingStatuses = ["queued", "failed", "audit_failed", "audited", "scheduled"] as const;

export type Draft = {
	releaseDraftId: string;
	surveyId: string;
	status: DraftStatus;
	season: number;
	title: Words;
	/** Of the survey: closing and publication are told and set on its clock. */
	timeZone: string;
	draftedBy: { personId: string; displayName: string };
	draftedAt: Date;
	computedAt: Date | null;
	decidedAt: Date | null;
	decisionNote: string | null;
	rules: ReleaseRules;
	method: ReleaseMethod | null;
	audit: ReleaseAudit | null;
	progress: DraftProgress | null;
	checksum: string | null;
	releaseId: string | null;
	publishAt: Date | null;
	/** The release that this one is to replace, and why; both null for a survey's first. */
	revises: string | null;
	revisionReason: Words | null;
};

/** What a draft has come to that cannot be made. */
type NoDraft = "not_found" | "not_closed" | "already_released" | "not_released";

/**
 * Starts a draft of a closed survey's release; an earlier one that waits is superseded. The figures are a job's work.
 * @param revisionReason why published figures are told anew: with it the draft is one of a revision, without it of a first
 *   release.
 */
export async function createDraft(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	rules: ReleaseRules,
	revisionReason: Words | null = null,
): Promise<{ outcome: "drafted"; releaseDraftId: string } | { outcome: NoDraft }> {
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
	const revises = await findNewestEdition(trx, surveyId);
	if (revises && !revisionReason) return { outcome: "already_released" };
	if (!revises && revisionReason) return { outcome: "not_released" };
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "superseded" })
		.where("survey_id", "=", surveyId)
		.where("status", "in", waitingStatuses)
		.execute();
	const { release_draft_id: releaseDraftId } = await trx
		.insertInto("collect.release_draft")
		.values({
			survey_id: surveyId,
			rules: JSON.stringify(rules),
			drafted_by: viewer.personId,
			revises,
			revision_reason: revisionReason && JSON.stringify(revisionReason),
		})
		.returning("release_draft_id")
		.executeTakeFirstOrThrow();
	return { outcome: "drafted", releaseDraftId };
}

/** The release of a survey that none has replaced, or null before the first. */
export async function findNewestEdition(trx: Trx, surveyId: string): Promise<string | null> {
	const row = await trx
		.selectFrom("release.release")
		.select("release_id")
		.where("series_id", "=", surveyId)
		.orderBy("edition", "desc")
		.limit(1)
		.executeTakeFirst();
	return row?.release_id ?? null;
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
		.where("d.status", "not in", ["superseded", "cancelled"])
		.orderBy(sql`d.status in ('audited', 'scheduled')`, "desc")
		.orderBy("d.drafted_at", "desc")
		.limit(200)
		.execute();
	return rows.map(toDraft);
}

export async function findDraft(trx: Trx, _viewer: Coordinator, releaseDraftId: string): Promise<Draft | undefined> {
	const row = await selectDrafts(trx).where("d.release_draft_id", "=", releaseDraftId).executeTakeFirst();
	return row && toDraft(row);
}

/** Why a release was withdrawn, or null while it stands. */
export async function findWithdrawal(trx: Trx, releaseId: string): Promise<Words | null> {
	const row = await trx
		.selectFrom("release.withdrawal")
		.select("reason")
		.where("release_id", "=", releaseId)
		.executeTakeFirst();
	return row ? Words.parse(row.reason) : null;
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
			sql<string>`collect.clock_of_survey(s.survey_id)`.as("time_zone"),
			"d.drafted_by",
			"p.display_name",
			"d.drafted_at",
			"d.computed_at",
			"d.decided_at",
			"d.decision_note",
			"d.rules",
			"d.method",
			"d.audit",
			"d.progress",
			"d.checksum",
			"d.release_id",
			"d.publish_at",
			"d.revises",
			"d.revision_reason",
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
		timeZone: row.time_zone,
		draftedBy: { personId: row.drafted_by, displayName: row.display_name },
		draftedAt: row.drafted_at,
		computedAt: row.computed_at,
		decidedAt: row.decided_at,
		decisionNote: row.decision_note,
		rules: ReleaseRules.parse(row.rules),
		method: row.method === null ? null : ReleaseMethod.parse(row.method),
		audit: row.audit === null ? null : ReleaseAudit.parse(row.audit),
		progress: row.progress === null ? null : DraftProgress.parse(row.progress),
		checksum: row.checksum,
		releaseId: row.release_id,
		publishAt: row.publish_at,
		revises: row.revises,
		revisionReason: row.revision_reason === null ? null : Words.parse(row.revision_reason),
	};
}
