import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { LogAction } from "#app/auth/log-actions.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { DraftWords, missingWords, ReportContent } from "../report.ts";
import { keepEdit } from "./report-edits.server.ts";

export type ReportState = "draft" | "submitted" | "scheduled" | "published";
export type DeskReport = {
	reportId: string;
	slug: string;
	releaseId: string;
	releaseNumber: number;
	season: number;
	state: ReportState;
	/** Counts saves. */
	edit: number;
	authorName: string;
	createdBy: string;
	editedBy: string[];
	/** What the coordinator asked for when sending it back. */
	note: string | null;
	updatedAt: string;
	submittedAt: string | null;
	publishedAt: string | null;
	/** When an approved report comes out. */
	publishAt: string | null;
	content: ReportContent;
	/** 1, and one more with each correction. */
	version: number;
	/** What a correction changed and why, as its readers see it; null for the first version. */
	correction: DraftWords | null;
	/** Number of the release that replaced this report's own, so that the report needs another look. */
	replacedBy: number | null;
	/** A later version of it is under way or published. */
	hasLater: boolean;
};

/** Whether a report rests on figures that have been revised since, with no later version of it looking at them anew. */
export const needsLook = ({ replacedBy, hasLater }: Pick<DeskReport, "replacedBy" | "hasLater">) =>
	replacedBy !== null && !hasLater;

/** Reports of every state of work, those waiting for approval first, then the last changed. */
export async function listReports(trx: Trx, _viewer: Associate | Coordinator): Promise<DeskReport[]> {
	const rows = await selectReports(trx)
		.orderBy(sql`report.state = 'submitted'`, "desc")
		.orderBy("report.updated_at", "desc")
		.orderBy("report.report_id")
		.execute();
	return rows.map(toReport);
}

export async function findReport(
	trx: Trx,
	_viewer: Associate | Coordinator,
	reportId: string,
): Promise<DeskReport | undefined> {
	if (!z.uuid().safeParse(reportId).success) return undefined;
	const row = await selectReports(trx).where("report.report_id", "=", reportId).executeTakeFirst();
	return row && toReport(row);
}

export type Saved =
	{ outcome: "saved"; edit: number } | { outcome: "conflict"; edit: number } | { outcome: "not_draft" };

/** Saves a draft if nobody else has since `edit`; else nothing is written and the present count comes back. */
export async function saveReport(
	trx: Trx,
	viewer: Associate,
	reportId: string,
	edit: number,
	content: ReportContent,
	correction: DraftWords | null = null,
): Promise<Saved> {
	const saved = await trx
		.updateTable("publish.report")
		.set({
			content: JSON.stringify(content),
			correction: correction && JSON.stringify(correction),
			edit: edit + 1,
			updated_at: sql`now()`,
			edited_by: sql`array(select distinct unnest(edited_by || ${viewer.personId}::uuid))`,
		})
		.where("report_id", "=", reportId)
		.where("state", "=", "draft")
		.where("edit", "=", edit)
		.returning("edit")
		.executeTakeFirst();
	if (saved) {
		await keepEdit(trx, viewer, reportId, saved.edit, content);
		return { outcome: "saved", edit: saved.edit };
	}
	const now = await findReport(trx, viewer, reportId);
	return now?.state === "draft" ? { outcome: "conflict", edit: now.edit } : { outcome: "not_draft" };
}

/** Hands a draft in for approval. Twice is harmless. Texts missing in a language keep it a draft. */
export async function submitReport(
	trx: Trx,
	viewer: Associate,
	reportId: string,
): Promise<"submitted" | "not_found" | "not_draft" | "incomplete"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	if (report.state === "submitted") return "submitted";
	if (report.state !== "draft") return "not_draft";
	if (missingWords(report.content, report.correction).length > 0) return "incomplete";
	await trx
		.updateTable("publish.report")
		.set({ state: "submitted", submitted_at: sql`now()`, note: null, updated_at: sql`now()` })
		.where("report_id", "=", reportId)
		.where("state", "=", "draft")
		.execute();
	await logReport(trx, viewer, "report.submitted", report);
	return "submitted";
}

/** Whether somebody wrote or edited the report, and so cannot be the second person. */
export function isOwn(report: Pick<DeskReport, "createdBy" | "editedBy">, viewer: { personId: string }): boolean {
	return report.createdBy === viewer.personId || report.editedBy.includes(viewer.personId);
}

export async function logReport(
	trx: Trx,
	viewer: { personId: string },
	action: LogAction,
	report: DeskReport,
	detail = {},
): Promise<void> {
	await logEvent(trx, {
		personId: viewer.personId,
		action,
		subjectKind: "report",
		subjectId: report.reportId,
		detail: { ...detail, slug: report.slug, release: report.releaseNumber },
	});
}

function selectReports(trx: Trx) {
	return trx
		.selectFrom("publish.report as report")
		.innerJoin("release.release as release", "release.release_id", "report.release_id")
		.leftJoin("release.release as next", "next.revises", "report.release_id")
		.leftJoin("publish.report as later", "later.corrects", "report.report_id")
		.select([
			"report.report_id",
			"report.slug",
			"report.release_id",
			"release.number",
			"release.season",
			"report.state",
			"report.edit",
			"report.author_name",
			"report.created_by",
			"report.edited_by",
			"report.note",
			"report.updated_at",
			"report.submitted_at",
			"report.published_at",
			"report.publish_at",
			"report.content",
			"report.version",
			"report.correction",
			"next.number as replaced_by",
			"later.report_id as later_id",
		]);
}

type ReportRow = Awaited<ReturnType<ReturnType<typeof selectReports>["executeTakeFirstOrThrow"]>>;

function toReport(row: ReportRow): DeskReport {
	return {
		reportId: row.report_id,
		slug: row.slug,
		releaseId: row.release_id,
		releaseNumber: row.number,
		season: row.season,
		state: row.state as ReportState,
		edit: row.edit,
		authorName: row.author_name,
		createdBy: row.created_by,
		editedBy: row.edited_by,
		note: row.note,
		updatedAt: row.updated_at.toISOString(),
		submittedAt: row.submitted_at?.toISOString() ?? null,
		publishedAt: row.published_at?.toISOString() ?? null,
		publishAt: row.publish_at?.toISOString() ?? null,
		content: ReportContent.parse(row.content),
		version: row.version,
		correction: row.version === 1 ? null : DraftWords.parse(row.correction ?? {}),
		replacedBy: row.replaced_by,
		hasLater: row.later_id !== null,
	};
}
