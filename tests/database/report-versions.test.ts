import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { decideReport } from "#app/jobs/decide-report.server.ts";
import { publishReportAtItsMinute, queueMissingPdfs } from "#app/jobs/publish-report.server.ts";
import { addComment, listComments, resolveComment } from "#app/publish/drafting/report-comments.server.ts";
import { startCorrection } from "#app/publish/drafting/report-correction.server.ts";
import { listEdits } from "#app/publish/drafting/report-edits.server.ts";
import { keepReportFile } from "#app/publish/drafting/report-files.server.ts";
import { listReportWork } from "#app/publish/drafting/report-work.server.ts";
import { findReport, needsLook, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import {
	findPublishedReport,
	findReportFile,
	listPublishedReports,
	listReportFiles,
	listVersions,
} from "#app/publish/reports.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
/** The queue is the application role's own. */
let app: Client;
let author: Associate;
let editor: Associate;
let coordinator: Coordinator;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	app = await connectOwner(database.appUrl);
	author = await addPerson(owner, "Iowa's associate", []);
	editor = await addPerson(owner, "Another associate", []);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await app.end();
	await owner.end();
	await database.drop();
});

const desk = <T>(work: Parameters<typeof asDesk<T>>[1]) => asDesk(author, work);
const words = (text: string) => ({ en: text, es: text });
const content = (title: string) => ({
	title: words(title),
	summary: words("Lost [[crop_loss|apple|network]]"),
	blocks: [{ id: "b1", type: "text" as const, text: words("Text") }],
});
const decide = (reportId: string, decision: Parameters<typeof decideReport>[3], now = new Date()) =>
	desk((trx) => decideReport(trx, coordinator, reportId, decision, now));

async function handIn(title: string, releaseId?: string): Promise<string> {
	const id = releaseId ?? (await addRelease(owner)).releaseId;
	const reportId = await desk((trx) => startReport(trx, author, id, { en: () => title, es: () => title }));
	if (!reportId) throw new Error("the release was not found");
	await desk((trx) => saveReport(trx, author, reportId, 1, content(title)));
	await desk((trx) => submitReport(trx, author, reportId));
	return reportId;
}

async function publish(title: string, releaseId?: string) {
	const reportId = await handIn(title, releaseId);
	await decide(reportId, { intent: "publish" });
	const report = await desk((trx) => findReport(trx, author, reportId));
	if (!report) throw new Error("the report is gone");
	return report;
}

test("an approved report is nobody's to read before its minute, and everybody's from then on", async () => {
	const reportId = await handIn("Set minute");
	const soon = { intent: "schedule" as const, publishOn: "2031-05-04", publishAt: "08:00" };
	expect(await decide(reportId, soon, new Date("2031-05-04T14:00:00Z"))).toMatchObject({
		problem: { code: "closing_past" },
	});
	expect(await decide(reportId, soon, new Date("2031-05-01T00:00:00Z"))).toEqual({ outcome: "scheduled" });
	const { slug, publishAt } = (await desk((trx) => findReport(trx, author, reportId)))!;
	expect(publishAt).toBe("2031-05-04T13:00:00.000Z");
	const { rows } = await app.query(
		"select run_at from graphile_worker.jobs where key = $1 and task_identifier = 'publish_report'",
		[`publish_report:${reportId}`],
	);
	expect(rows[0].run_at.toISOString()).toBe("2031-05-04T13:00:00.000Z");
	await expect(publishReportAtItsMinute({ reportId })).rejects.toThrow("not_yet");
	expect(await findPublishedReport(slug)).toBeUndefined();

	await owner.query("update publish.report set publish_at = now() - interval '1 second' where report_id = $1", [
		reportId,
	]);
	await publishReportAtItsMinute({ reportId });
	await publishReportAtItsMinute({ reportId });
	expect(await findPublishedReport(slug)).toMatchObject({ version: 1 });
	expect(
		await count(owner, "publish.report where report_id = $1 and published_by = $2", [reportId, coordinator.personId]),
	).toBe(1);
	const queued = await app.query(
		"select task_identifier as task from graphile_worker.jobs where key like '%' || $1 || '%' order by 1",
		[reportId],
	);
	expect(queued.rows.map(({ task }) => task)).toEqual(
		expect.arrayContaining(["mail_report", "print_report", "print_report"]),
	);
});

test("a worker that starts has the PDFs printed that a published report lacks, and no others", async () => {
	const { reportId } = await publish("Without a PDF");
	const draftId = await handIn("Not out");
	await app.query("select graphile_worker.remove_job(key) from graphile_worker.jobs where key like 'print_report:%'");
	await desk((trx) => keepReportFile(trx, reportId, "es", { bytes: Buffer.from("%PDF-") }, 0));
	await desk((trx) => keepReportFile(trx, reportId, "en", { problem: "no_browser" }, 0));
	await queueMissingPdfs();
	const { rows } = await app.query("select key from graphile_worker.jobs where key like 'print_report:%'");
	const keys = rows.map(({ key }) => key as string).filter((key) => key.includes(reportId) || key.includes(draftId));
	expect(keys).toEqual([`print_report:${reportId}:en`]);
});

test("an approval is taken back until its minute; the job that comes then publishes nothing", async () => {
	const reportId = await handIn("Taken back");
	const now = new Date("2031-05-01T00:00:00Z");
	await decide(reportId, { intent: "schedule", publishOn: "2031-05-04", publishAt: "08:00" }, now);
	expect(await decide(reportId, { intent: "unschedule" })).toEqual({ outcome: "unscheduled" });
	await publishReportAtItsMinute({ reportId });
	expect((await desk((trx) => findReport(trx, author, reportId)))?.state).toBe("submitted");
	expect(await count(app, "graphile_worker.jobs where key = $1", [`publish_report:${reportId}`])).toBe(0);
});

test("nobody schedules a report of their own, whoever writes the row", async () => {
	const reportId = await handIn("Own");
	const own = { ...author, role: "coordinator" } as unknown as Coordinator;
	const soon = { intent: "schedule" as const, publishOn: "2031-05-04", publishAt: "08:00" };
	const now = new Date("2031-05-01T00:00:00Z");
	expect(await desk((trx) => decideReport(trx, own, reportId, soon, now))).toEqual({ outcome: "own_report" });
	const forced =
		"update publish.report set state = 'scheduled', approved_by = $2, publish_at = now() where report_id = $1";
	await expect(owner.query(forced, [reportId, author.personId])).rejects.toThrow("report_approved_by_second_person");
});

test("a correction is a next version at the same address that says what changed, and leaves the first as it was", async () => {
	const first = await publish("To correct");
	const started = await desk((trx) => startCorrection(trx, author, first.reportId));
	const again = await desk((trx) => startCorrection(trx, author, first.reportId));
	expect(again).toEqual(started);
	if (started.outcome !== "started") throw new Error(started.outcome);
	const { reportId } = started;
	expect((await findPublishedReport(first.slug))?.version).toBe(1);
	expect(await desk((trx) => findReport(trx, author, first.reportId))).toMatchObject({ hasLater: true });

	const better = content("Corrected");
	await desk((trx) => saveReport(trx, author, reportId, 1, better, words("")));
	expect(await desk((trx) => submitReport(trx, author, reportId))).toBe("incomplete");
	await desk((trx) => saveReport(trx, author, reportId, 2, better, words("Plums were named apples.")));
	expect(await desk((trx) => submitReport(trx, author, reportId))).toBe("submitted");
	await decide(reportId, { intent: "publish" });

	const now = await findPublishedReport(first.slug);
	expect(now).toMatchObject({ version: 2, title: { en: "Corrected" }, correction: { en: "Plums were named apples." } });
	expect(await findPublishedReport(first.slug, 1)).toMatchObject({ title: { en: "To correct" }, correction: null });
	expect((await listVersions(first.slug)).map(({ version }) => version)).toEqual([2, 1]);
	expect((await listPublishedReports()).filter(({ slug }) => slug === first.slug)).toHaveLength(1);
});

test("a revised release marks the reports that rest on it, until a next version looks at it anew", async () => {
	const release = await addRelease(owner);
	const report = await publish("On revised figures", release.releaseId);
	expect(needsLook(report)).toBe(false);
	const revised = await addRelease(owner);
	await owner.query("alter table release.release disable trigger frozen");
	await owner.query(
		`update release.release set revises = $1, edition = 2, revision_reason = '{"en":"r","es":"r"}',
			series_id = (select series_id from release.release where release_id = $1) where release_id = $2`,
		[release.releaseId, revised.releaseId],
	);
	await owner.query("alter table release.release enable trigger frozen");
	const marked = await desk((trx) => findReport(trx, author, report.reportId));
	expect(marked && needsLook(marked)).toBe(true);
	expect(marked?.replacedBy).toBe(revised.number);
	const waiting = { reportId: report.reportId, title: marked?.content.title, work: "revised" };
	expect(await desk((trx) => listReportWork(trx, author))).toContainEqual(waiting);
	const started = await desk((trx) => startCorrection(trx, author, report.reportId));
	const next = await desk((trx) => findReport(trx, author, started.outcome === "started" ? started.reportId : ""));
	expect(next).toMatchObject({ releaseId: revised.releaseId, version: 2 });
	const after = await desk((trx) => findReport(trx, author, report.reportId));
	expect(after && needsLook(after)).toBe(false);
	expect(await desk((trx) => listReportWork(trx, author))).not.toContainEqual(waiting);
});

test("saves of one person within ten minutes are one kept version; another person's is the next", async () => {
	const { releaseId } = await addRelease(owner);
	const reportId =
		(await desk((trx) => startReport(trx, author, releaseId, { en: () => "Title", es: () => "Title" }))) ?? "";
	await desk((trx) => saveReport(trx, author, reportId, 1, content("two")));
	await desk((trx) => saveReport(trx, author, reportId, 2, content("three")));
	await asDesk(editor, (trx) => saveReport(trx, editor, reportId, 3, content("four")));
	await owner.query("update publish.report_edit set saved_at = now() - interval '11 minutes' where report_id = $1", [
		reportId,
	]);
	await asDesk(editor, (trx) => saveReport(trx, editor, reportId, 4, content("five")));
	const edits = await desk((trx) => listEdits(trx, reportId));
	expect(edits.map(({ edit, savedByName }) => [edit, savedByName])).toEqual([
		[5, "Another associate"],
		[4, "Another associate"],
		[3, "Iowa's associate"],
	]);
	expect(edits.at(-1)?.content.title.en).toBe("three");
});

test("comments are kept with block and author and are dealt with once; a published report takes none", async () => {
	const reportId = await handIn("Commented");
	const add = (blockId: string | null) =>
		desk((trx) => addComment(trx, coordinator, reportId, { body: "Say more on plums", blockId }));
	expect(await add("b1")).toBe("added");
	expect(await add("gone")).toBe("added");
	const comments = await desk((trx) => listComments(trx, author, reportId));
	expect(comments).toMatchObject([
		{ blockId: "b1", authorName: "The coordinator", resolvedAt: null },
		{ blockId: null },
	]);
	const other = await handIn("Other");
	const id = comments[0]!.commentId;
	expect(await desk((trx) => resolveComment(trx, author, other, id))).toBe("not_found");
	expect(await desk((trx) => resolveComment(trx, author, reportId, id))).toBe("resolved");
	expect((await desk((trx) => listComments(trx, author, reportId))).at(-1)).toMatchObject({ commentId: id });
	await decide(reportId, { intent: "publish" });
	expect(await add(null)).toBe("not_found");
});

test("nothing of a draft is a reader's: no row, no file, no comment, no earlier save", async () => {
	const reportId = await handIn("Secret draft");
	const bytes = Buffer.from("%PDF-1.7 of a draft");
	await desk((trx) => keepReportFile(trx, reportId, "en", { bytes }, 0));
	await desk((trx) => addComment(trx, coordinator, reportId, { body: "Not for readers", blockId: null }));
	expect(await count(owner, "publish.report_file where report_id = $1", [reportId])).toBe(1);
	expect(await listReportFiles(reportId)).toEqual([]);
	expect(await findReportFile(reportId, "en")).toBeUndefined();
	await using reader = await connectOwner(database.readerUrl);
	for (const table of ["report_comment", "report_edit"])
		await expect(reader.query(`select 1 from publish.${table}`)).rejects.toThrow("permission denied");
	for (const column of ["publish_at", "approved_by", "note"])
		await expect(reader.query(`select ${column} from publish.report`)).rejects.toThrow("permission denied");
	expect((await reader.query("select 1 from publish.report_photo")).rowCount).toBe(0);

	await decide(reportId, { intent: "publish" });
	expect(await findReportFile(reportId, "en")).toEqual(bytes);
});

// The last test of the file, as a withdrawal stays.
test("the printed report of a release that was withdrawn is no reader's any more, though it is there", async () => {
	const reportId = await handIn("Withdrawn");
	await desk((trx) => keepReportFile(trx, reportId, "en", { bytes: Buffer.from("%PDF-1.7 with figures") }, 0));
	await decide(reportId, { intent: "publish" });
	await using reader = await connectOwner(database.readerUrl);
	const seen = async () =>
		(await reader.query("select 1 from publish.report_file where report_id = $1", [reportId])).rowCount;
	expect(await seen()).toBe(1);
	await owner.query(
		`insert into release.withdrawal (release_id, reason)
		select release_id, '{"en": "Wrong.", "es": "Mal."}' from publish.report where report_id = $1`,
		[reportId],
	);
	expect(await seen()).toBe(0);
	expect(await findReportFile(reportId, "en")).toBeUndefined();
	expect(await count(owner, "publish.report_file where report_id = $1", [reportId])).toBe(1);
});
