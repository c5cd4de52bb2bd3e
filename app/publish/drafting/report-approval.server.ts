import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { findReport, isOwn, logReport } from "./reports.server.ts";

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
	await logReport(trx, viewer, "report.sent_back", report);
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
	await logReport(trx, viewer, "report.published", report);
	return "published";
}

/** Approves a submitted report for a minute to come, at which everybody sees it. */
export async function scheduleReport(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
	publishAt: Date,
): Promise<"scheduled" | "not_found" | "not_waiting" | "own_report"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	if (report.state !== "submitted") return "not_waiting";
	if (isOwn(report, viewer)) return "own_report";
	await trx
		.updateTable("publish.report")
		.set({ state: "scheduled", approved_by: viewer.personId, publish_at: publishAt, updated_at: sql`now()` })
		.where("report_id", "=", reportId)
		.where("state", "=", "submitted")
		.execute();
	await logReport(trx, viewer, "report.scheduled", report, { at: publishAt.toISOString() });
	return "scheduled";
}

/** Takes an approval back until its minute has come; the report then waits for a decision again. */
export async function unscheduleReport(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
): Promise<"unscheduled" | "not_found" | "not_scheduled"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	const { numUpdatedRows } = await trx
		.updateTable("publish.report")
		.set({ state: "submitted", approved_by: null, publish_at: null, updated_at: sql`now()` })
		.where("report_id", "=", reportId)
		.where("state", "=", "scheduled")
		.executeTakeFirst();
	if (numUpdatedRows === 0n) return "not_scheduled";
	await logReport(trx, viewer, "report.unscheduled", report);
	return "unscheduled";
}

/**
 * Publishes an approved report whose minute has come. One whose approval was taken back is left alone.
 * @returns the report's address and approver, or why nothing happened.
 */
export async function publishScheduled(
	trx: Trx,
	reportId: string,
): Promise<{ outcome: "published"; approvedBy: string } | { outcome: "not_scheduled" | "not_yet" }> {
	const row = await trx
		.selectFrom("publish.report")
		.select(["state", "approved_by", sql<boolean>`publish_at <= clock_timestamp()`.as("due")])
		.where("report_id", "=", reportId)
		.forUpdate()
		.executeTakeFirst();
	if (row?.state !== "scheduled" || !row.approved_by) return { outcome: "not_scheduled" };
	if (!row.due) return { outcome: "not_yet" };
	await trx
		.updateTable("publish.report")
		.set({
			state: "published",
			published_by: row.approved_by,
			published_at: sql`clock_timestamp()`,
			updated_at: sql`now()`,
		})
		.where("report_id", "=", reportId)
		.execute();
	return { outcome: "published", approvedBy: row.approved_by };
}
