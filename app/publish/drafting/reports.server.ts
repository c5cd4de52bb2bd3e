import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { LogAction } from "#app/auth/log-actions.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { missingWords, ReportContent } from "../report.ts";

export type ReportState = "draft" | "submitted" | "published";
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
	content: ReportContent;
};

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
): Promise<Saved> {
	const saved = await trx
		.updateTable("publish.report")
		.set({
			content: JSON.stringify(content),
			edit: edit + 1,
			updated_at: sql`now()`,
			edited_by: sql`array(select distinct unnest(edited_by || ${viewer.personId}::uuid))`,
		})
		.where("report_id", "=", reportId)
		.where("state", "=", "draft")
		.where("edit", "=", edit)
		.returning("edit")
		.executeTakeFirst();
	if (saved) return { outcome: "saved", edit: saved.edit };
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
	if (missingWords(report.content).length > 0) return "incomplete";
	await trx
		.updateTable("publish.report")
		.set({ state: "submitted", submitted_at: sql`now()`, note: null, updated_at: sql`now()` })
		.where("report_id", "=", reportId)
		.where("state", "=", "draft")
		.execute();
	await log(trx, viewer, "report.submitted", report);
	return "submitted";
}

/** Sends a submitted report back to its author with what is to be changed. */
export async function sendReportBack(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
	note: string,
): Promise<"sent_back" | "not_found" | "not_waiting"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	if (report.state !== "submitted") return "not_waiting";
	await trx
		.updateTable("publish.report")
		.set({ state: "draft", submitted_at: null, note, edit: sql`edit + 1`, updated_at: sql`now()` })
		.where("report_id", "=", reportId)
		.where("state", "=", "submitted")
		.execute();
	await log(trx, viewer, "report.sent_back", report);
	return "sent_back";
}

/** Publishes a submitted report at once. Whoever wrote or edited it cannot; the database refuses that too. */
export async function publishReport(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
	publishedAt: Date = new Date(),
): Promise<"published" | "not_found" | "not_waiting" | "own_report"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	if (report.state === "published") return "published";
	if (report.state !== "submitted") return "not_waiting";
	if (isOwn(report, viewer)) return "own_report";
	await trx
		.updateTable("publish.report")
		.set({ state: "published", published_by: viewer.personId, published_at: publishedAt, updated_at: publishedAt })
		.where("report_id", "=", reportId)
		.where("state", "=", "submitted")
		.execute();
	await log(trx, viewer, "report.published", report);
	return "published";
}

/** Whether somebody wrote or edited the report, and so cannot be the second person. */
export function isOwn(report: Pick<DeskReport, "createdBy" | "editedBy">, viewer: { personId: string }): boolean {
	return report.createdBy === viewer.personId || report.editedBy.includes(viewer.personId);
}

async function log(trx: Trx, viewer: { personId: string }, action: LogAction, report: DeskReport): Promise<void> {
	await logEvent(trx, {
		personId: viewer.personId,
		action,
		subjectKind: "report",
		subjectId: report.reportId,
		detail: { slug: report.slug, release: report.releaseNumber },
	});
}

function selectReports(trx: Trx) {
	return trx
		.selectFrom("publish.report as report")
		.innerJoin("release.release as release", "release.release_id", "report.release_id")
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
			"report.content",
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
		content: ReportContent.parse(row.content),
	};
}
