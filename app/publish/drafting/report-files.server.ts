import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";

export type FileProblem = "no_browser" | "failed";
export type ReportFile = { language: string; madeAt: string; problem: FileProblem | null };

/** How many photos have been taken out of a report so far, in all its versions. */
export async function countTakenAway(trx: Trx, reportId: string): Promise<number> {
	const { gone } = await trx
		.selectFrom("publish.report_photo as p")
		.innerJoin("publish.report as its", "its.report_id", "p.report_id")
		.innerJoin("publish.report as printed", "printed.slug", "its.slug")
		.select((eb) => eb.fn.countAll<number>().as("gone"))
		.where("printed.report_id", "=", reportId)
		.where("p.taken_away_at", "is not", null)
		.executeTakeFirstOrThrow();
	return gone;
}

/**
 * Keeps a report's PDF in one language, or why there is none; a later one takes its place.
 * @param goneBefore how many photos were taken away when it was begun. Where more are now, it may show one of them and is not
 *   kept: another was queued with that.
 */
export async function keepReportFile(
	trx: Trx,
	reportId: string,
	language: string,
	made: { bytes: Buffer } | { problem: FileProblem },
	goneBefore: number,
): Promise<void> {
	if ((await countTakenAway(trx, reportId)) > goneBefore) return;
	const file = { bytes: "bytes" in made ? made.bytes : null, problem: "problem" in made ? made.problem : null };
	await trx
		.insertInto("publish.report_file")
		.values({ report_id: reportId, language, ...file })
		.onConflict((conflict) => conflict.columns(["report_id", "language"]).doUpdateSet({ ...file, made_at: sql`now()` }))
		.execute();
}

/** What became of a report's PDFs, for the desk; the bytes stay where they are. */
export async function listFileStates(trx: Trx, reportId: string): Promise<ReportFile[]> {
	const rows = await trx
		.selectFrom("publish.report_file")
		.select(["language", "made_at", "problem"])
		.where("report_id", "=", reportId)
		.orderBy("language")
		.execute();
	return rows.map((row) => ({
		language: row.language,
		madeAt: row.made_at.toISOString(),
		problem: row.problem as FileProblem | null,
	}));
}
