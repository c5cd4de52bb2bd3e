import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { ReportContent } from "../report.ts";

/** One kept state of a draft. Saves of one person within ten minutes are one. */
export type ReportEdit = { edit: number; savedByName: string; savedAt: string; content: ReportContent };

/** Keeps what was saved. What the same person saved a moment before makes way, so that autosaving leaves no thousand rows. */
export async function keepEdit(
	trx: Trx,
	{ personId }: { personId: string },
	reportId: string,
	edit: number,
	content: ReportContent,
): Promise<void> {
	await trx
		.deleteFrom("publish.report_edit")
		.where("report_id", "=", reportId)
		.where("edit", "=", edit - 1)
		.where("saved_by", "=", personId)
		.where("saved_at", ">", sql<Date>`now() - interval '10 minutes'`)
		.execute();
	await trx
		.insertInto("publish.report_edit")
		.values({ report_id: reportId, edit, content: JSON.stringify(content), saved_by: personId })
		.execute();
}

/** Kept states of a draft, the latest first. */
export async function listEdits(trx: Trx, reportId: string): Promise<ReportEdit[]> {
	const rows = await trx
		.selectFrom("publish.report_edit as e")
		.innerJoin("auth.person as p", "p.person_id", "e.saved_by")
		.select(["e.edit", "e.saved_at", "e.content", "p.display_name"])
		.where("e.report_id", "=", reportId)
		.orderBy("e.edit", "desc")
		.limit(100)
		.execute();
	return rows.map((row) => ({
		edit: row.edit,
		savedByName: row.display_name,
		savedAt: row.saved_at.toISOString(),
		content: ReportContent.parse(row.content),
	}));
}
