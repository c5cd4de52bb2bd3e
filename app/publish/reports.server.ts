import type { Kysely } from "kysely";
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
};
export type PublishedReport = ListedReport & { content: ReportContent };

/**
 * Published reports, the latest first, but for those whose figures were withdrawn. Drafts are hidden by the role's row-level
 * security, not by this query alone.
 */
export async function listPublishedReports(db: Reader = reader()): Promise<ListedReport[]> {
	const rows = await selectReports(db)
		.where("release_id", "not in", (eb) => eb.selectFrom("release.withdrawal as w").select("w.release_id"))
		.orderBy("published_at", "desc")
		.orderBy("slug")
		.execute();
	return rows.map(toReport).map(({ content: _content, ...listed }) => listed);
}

export async function findPublishedReport(slug: string, db: Reader = reader()): Promise<PublishedReport | undefined> {
	const row = await selectReports(db).where("slug", "=", slug).executeTakeFirst();
	return row && toReport(row);
}

function selectReports(db: Reader) {
	return db
		.selectFrom("publish.report")
		.select(["slug", "release_id", "content", "version", "author_name", "published_at"])
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
		content,
	};
}
