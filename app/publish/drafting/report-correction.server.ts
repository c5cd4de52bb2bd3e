import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { ReportContent } from "../report.ts";
import { keepEdit } from "./report-edits.server.ts";
import { findReport, logReport } from "./reports.server.ts";

/**
 * Starts the next version of a published report, on the release that stands now: the text as it was, every figure looked up
 * anew. A second start finds the one that is under way.
 * @returns the draft's id, or why there is none.
 */
export async function startCorrection(
	trx: Trx,
	author: Associate,
	reportId: string,
): Promise<{ outcome: "started"; reportId: string } | { outcome: "not_found" | "not_published" }> {
	const report = await findReport(trx, author, reportId);
	if (!report) return { outcome: "not_found" };
	if (report.state !== "published") return { outcome: "not_published" };
	const versions = await trx
		.selectFrom("publish.report")
		.select(["report_id", "version", "state", "release_id", "content"])
		.where("slug", "=", report.slug)
		.orderBy("version", "desc")
		.forUpdate()
		.execute();
	const latest = versions[0];
	if (!latest) return { outcome: "not_found" };
	if (latest.state !== "published") return { outcome: "started", reportId: latest.report_id };
	const { report_id } = await trx
		.insertInto("publish.report")
		.values({
			slug: report.slug,
			version: latest.version + 1,
			corrects: latest.report_id,
			release_id: await standingEdition(trx, latest.release_id),
			content: JSON.stringify(latest.content),
			created_by: author.personId,
			author_name: author.displayName,
		})
		.returning("report_id")
		.executeTakeFirstOrThrow();
	await keepEdit(trx, author, report_id, 1, ReportContent.parse(latest.content));
	await logReport(trx, author, "report.corrected", report);
	return { outcome: "started", reportId: report_id };
}

/** The edition that replaced a release, and so on; the release itself where nothing did. */
async function standingEdition(trx: Trx, releaseId: string): Promise<string> {
	const row = await trx
		.selectFrom("release.release as now")
		.innerJoin("release.release as latest", "latest.series_id", "now.series_id")
		.select("latest.release_id")
		.where("now.release_id", "=", releaseId)
		.where("latest.release_id", "not in", (eb) => eb.selectFrom("release.withdrawal as w").select("w.release_id"))
		.orderBy("latest.edition", "desc")
		.limit(1)
		.executeTakeFirst();
	return row?.release_id ?? releaseId;
}
