import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { findReport } from "./reports.server.ts";

export type ReportComment = {
	commentId: string;
	/** The block it is about; null: the report as a whole, or a block that is gone. */
	blockId: string | null;
	body: string;
	authorName: string;
	writtenAt: string;
	resolvedAt: string | null;
};
type Viewer = Associate | Coordinator;

/** Comments on a report, those that wait for an answer first, in the order they were written. */
export async function listComments(trx: Trx, _viewer: Viewer, reportId: string): Promise<ReportComment[]> {
	const rows = await trx
		.selectFrom("publish.report_comment")
		.select(["report_comment_id", "block_id", "body", "author_name", "written_at", "resolved_at"])
		.where("report_id", "=", reportId)
		.orderBy(sql`resolved_at is not null`)
		.orderBy("written_at")
		.execute();
	return rows.map((row) => ({
		commentId: row.report_comment_id,
		blockId: row.block_id,
		body: row.body,
		authorName: row.author_name,
		writtenAt: row.written_at.toISOString(),
		resolvedAt: row.resolved_at?.toISOString() ?? null,
	}));
}

/** Adds a comment to a report that is not published yet. */
export async function addComment(
	trx: Trx,
	viewer: Viewer,
	reportId: string,
	{ body, blockId }: { body: string; blockId: string | null },
): Promise<"added" | "not_found"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report || report.state === "published") return "not_found";
	const known = report.content.blocks.some(({ id }) => id === blockId);
	await trx
		.insertInto("publish.report_comment")
		.values({
			report_id: reportId,
			block_id: known ? blockId : null,
			body,
			written_by: viewer.personId,
			author_name: viewer.displayName,
		})
		.execute();
	return "added";
}

/** Marks a comment as dealt with. Twice is harmless. */
export async function resolveComment(
	trx: Trx,
	viewer: Viewer,
	reportId: string,
	commentId: string,
): Promise<"resolved" | "not_found"> {
	if (!z.uuid().safeParse(commentId).success) return "not_found";
	const found = await trx
		.selectFrom("publish.report_comment")
		.select("resolved_at")
		.where("report_id", "=", reportId)
		.where("report_comment_id", "=", commentId)
		.executeTakeFirst();
	if (!found) return "not_found";
	await trx
		.updateTable("publish.report_comment")
		.set({ resolved_at: sql`now()`, resolved_by: viewer.personId })
		.where("report_comment_id", "=", commentId)
		.where("resolved_at", "is", null)
		.execute();
	return "resolved";
}
