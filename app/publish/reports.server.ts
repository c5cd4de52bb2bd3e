import type { ExpressionBuilder, Kysely } from "kysely";
import { Words } from "#app/lib/words.ts";
import { reader, type ReaderDB } from "./reader.server.ts";
import { type DraftWords, ReportContent } from "./report.ts";

type Reader = Kysely<ReaderDB>;

export type ListedReport = {
	slug: string;
	title: DraftWords;
	summary: DraftWords;
	authorName: string;
	version: number;
	/** ISO moment. */
	publishedAt: string;
	releaseId: string;
	reportId: string;
	/** What this version changed and why; null for the first. */
	correction: Words | null;
};
export type ReportVersion = Pick<ListedReport, "version" | "publishedAt" | "correction">;
export type PublishedReport = ListedReport & { content: ReportContent };

/**
 * Published reports in their latest version, the latest first, but for those whose figures were withdrawn. Drafts are hidden by
 * the role's row-level security, not by this query alone.
 */
export async function listPublishedReports(db: Reader = reader()): Promise<ListedReport[]> {
	const rows = await selectReports(db)
		.where("release_id", "not in", (eb) => eb.selectFrom("release.withdrawal as w").select("w.release_id"))
		.where("report_id", "not in", (eb) => corrected(eb))
		.orderBy("published_at", "desc")
		.orderBy("slug")
		.execute();
	return rows.map(toReport).map(({ content: _content, ...listed }) => listed);
}

/** A report by its address: the latest version, or the one that is asked for. */
export async function findPublishedReport(
	slug: string,
	version?: number,
	db: Reader = reader(),
): Promise<PublishedReport | undefined> {
	let query = selectReports(db).where("slug", "=", slug).orderBy("version", "desc").limit(1);
	if (version !== undefined) query = query.where("version", "=", version);
	const row = await query.executeTakeFirst();
	return row && toReport(row);
}

export async function findPublishedById(reportId: string, db: Reader = reader()): Promise<PublishedReport | undefined> {
	const row = await selectReports(db).where("report_id", "=", reportId).executeTakeFirst();
	return row && toReport(row);
}

/** Every published version of one report, the latest first: when it came and what it changed. */
export async function listVersions(slug: string, db: Reader = reader()): Promise<ReportVersion[]> {
	const rows = await selectReports(db).where("slug", "=", slug).orderBy("version", "desc").execute();
	return rows.map(toReport).map(({ version, publishedAt, correction }) => ({ version, publishedAt, correction }));
}

/** Which of a report's languages have a PDF. */
export async function listReportFiles(reportId: string, db: Reader = reader()): Promise<string[]> {
	const rows = await db
		.selectFrom("publish.report_file")
		.select("language")
		.where("report_id", "=", reportId)
		.where("bytes", "is not", null)
		.execute();
	return rows.map(({ language }) => language);
}

/** Published reports, every version of them, that have no PDF in a language. */
export async function listReportsWithoutFile(language: string, db: Reader = reader()): Promise<string[]> {
	const rows = await db
		.selectFrom("publish.report as r")
		.leftJoin("publish.report_file as f", (join) =>
			join.onRef("f.report_id", "=", "r.report_id").on("f.language", "=", language),
		)
		.select("r.report_id")
		.where("r.state", "=", "published")
		.where("f.bytes", "is", null)
		.execute();
	return rows.map(({ report_id }) => report_id);
}

export async function findReportFile(
	reportId: string,
	language: string,
	db: Reader = reader(),
): Promise<Buffer | undefined> {
	const row = await db
		.selectFrom("publish.report_file")
		.select("bytes")
		.where("report_id", "=", reportId)
		.where("language", "=", language)
		.executeTakeFirst();
	return row?.bytes ?? undefined;
}

const corrected = (eb: ExpressionBuilder<ReaderDB, "publish.report">) =>
	eb.selectFrom("publish.report as next").select("next.corrects").where("next.corrects", "is not", null);

function selectReports(db: Reader) {
	return db
		.selectFrom("publish.report")
		.select(["report_id", "slug", "release_id", "content", "version", "author_name", "published_at", "correction"])
		.where("state", "=", "published")
		.where("published_at", "is not", null);
}

type ReportRow = Awaited<ReturnType<ReturnType<typeof selectReports>["executeTakeFirstOrThrow"]>>;

function toReport(row: ReportRow): PublishedReport {
	const content = ReportContent.parse(row.content);
	return {
		slug: row.slug,
		title: content.title,
		summary: content.summary,
		authorName: row.author_name,
		version: row.version,
		publishedAt: row.published_at?.toISOString() ?? "",
		releaseId: row.release_id,
		reportId: row.report_id,
		correction: row.correction === null ? null : Words.parse(row.correction),
		content,
	};
}
