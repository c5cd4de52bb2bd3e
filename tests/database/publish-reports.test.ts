import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import type { Say } from "#app/publish/drafting/draft-report.ts";
import { publishReport, sendReportBack } from "#app/publish/drafting/report-approval.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import { findRelease } from "#app/publish/releases.server.ts";
import { findPublishedReport, listPublishedReports } from "#app/publish/reports.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let author: Associate;
let editor: Associate;
let coordinator: Coordinator;
let release: Awaited<ReturnType<typeof addRelease>>;
const say: Say = (key, values = {}) => `${key} ${Object.values(values).join(" ")}`;
const content = (en: string, blocks: object[] = []) => ({
	title: { en, es: en },
	summary: { en, es: en },
	blocks: [{ id: "b1", type: "text" as const, text: { en, es: en } }, ...blocks] as never[],
});

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	release = await addRelease(owner);
	author = await addPerson(owner, "Iowa's associate", []);
	editor = await addPerson(owner, "Another associate", []);
	coordinator = asCoordinator(await addPerson(owner, "The coordinator", []));
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const asCoordinator = (person: Associate) => ({ ...person, role: "coordinator" }) as unknown as Coordinator;
const network = <T>(work: Parameters<typeof asDesk<T>>[1]) => asDesk(author, work);

async function startDraft() {
	const reportId = await network((trx) => startReport(trx, author, release.releaseId, { en: say, es: say }));
	if (!reportId) throw new Error("the release was not found");
	return reportId;
}

test("a report goes from draft over a second person to the public page, and every step is logged", async () => {
	const reportId = await startDraft();
	const draft = await network((trx) => findReport(trx, author, reportId));
	expect(draft).toMatchObject({ state: "draft", edit: 1, releaseNumber: release.number });
	expect(await findPublishedReport(draft?.slug ?? "")).toBeUndefined();

	expect(await network((trx) => publishReport(trx, coordinator, reportId))).toBe("not_waiting");
	expect(await network((trx) => submitReport(trx, author, reportId))).toBe("submitted");
	expect(await network((trx) => submitReport(trx, author, reportId))).toBe("submitted");
	expect(await network((trx) => publishReport(trx, asCoordinator(author), reportId))).toBe("own_report");
	expect(await network((trx) => publishReport(trx, coordinator, reportId))).toBe("published");
	expect(await network((trx) => publishReport(trx, coordinator, reportId))).toBe("published");

	const published = await findPublishedReport(draft?.slug ?? "");
	expect(published).toMatchObject({ authorName: "Iowa's associate", version: 1 });
	expect((await listPublishedReports()).map(({ slug }) => slug)).toContain(draft?.slug);
	const { rows } = await owner.query("select action from log.event where subject_id = $1 order by event_id", [
		reportId,
	]);
	expect(rows.map(({ action }) => action)).toEqual(["report.started", "report.submitted", "report.published"]);
});

test("two editors: the second is told, and nothing of the first is overwritten", async () => {
	const reportId = await startDraft();
	expect(await asDesk(author, (trx) => saveReport(trx, author, reportId, 1, content("first")))).toEqual({
		outcome: "saved",
		edit: 2,
	});
	expect(await asDesk(editor, (trx) => saveReport(trx, editor, reportId, 1, content("second")))).toEqual({
		outcome: "conflict",
		edit: 2,
	});
	expect((await network((trx) => findReport(trx, author, reportId)))?.content.title.en).toBe("first");
});

test("who edited a report cannot publish it: the code says so and the database refuses it", async () => {
	const reportId = await startDraft();
	await asDesk(editor, (trx) => saveReport(trx, editor, reportId, 1, content("mine")));
	await network((trx) => submitReport(trx, author, reportId));
	expect(await network((trx) => publishReport(trx, asCoordinator(editor), reportId))).toBe("own_report");
	for (const [personId, constraint] of [
		[editor.personId, "report_not_by_editor"],
		[author.personId, "report_second_person"],
	]) {
		const forced = owner.query(
			"update publish.report set state = 'published', published_by = $2, published_at = now() where report_id = $1",
			[reportId, personId],
		);
		await expect(forced).rejects.toThrow(constraint);
	}
});

test("a report that lacks Spanish stays a draft; one sent back carries the note to its author", async () => {
	const reportId = await startDraft();
	const halfDone = { ...content("text"), title: { en: "Only English", es: "" } };
	await asDesk(author, (trx) => saveReport(trx, author, reportId, 1, halfDone));
	expect(await network((trx) => submitReport(trx, author, reportId))).toBe("incomplete");
	await asDesk(author, (trx) => saveReport(trx, author, reportId, 2, content("whole")));
	expect(await network((trx) => submitReport(trx, author, reportId))).toBe("submitted");
	expect(await asDesk(author, (trx) => saveReport(trx, author, reportId, 3, content("late")))).toEqual({
		outcome: "not_draft",
	});
	expect(await network((trx) => sendReportBack(trx, coordinator, reportId, "Say more on plums"))).toBe("sent_back");
	expect(await network((trx) => findReport(trx, author, reportId))).toMatchObject({
		state: "draft",
		note: "Say more on plums",
	});
});

test("a published report takes no change, and the reader's role sees no draft and no person", async () => {
	const hidden = await startDraft();
	const { rows } = await owner.query("select report_id from publish.report where state = 'published' limit 1");
	for (const act of [
		"update publish.report set slug = 'other' where report_id = $1",
		"delete from publish.report where report_id = $1",
	]) {
		await expect(owner.query(act, [rows[0].report_id])).rejects.toThrow("published_report_is_frozen");
	}
	await using reader = await connectOwner(database.readerUrl);
	expect((await reader.query("select report_id from publish.report where report_id = $1", [hidden])).rowCount).toBe(0);
	expect(await count(owner, "publish.report where report_id = $1", [hidden])).toBe(1);
	for (const column of ["created_by", "published_by", "edited_by", "note"]) {
		await expect(reader.query(`select ${column} from publish.report`)).rejects.toThrow("permission denied");
	}
});

test("references are looked up in the release: a withheld one has its word's status and no number", async () => {
	const found = await findRelease(release.number);
	if (!found) throw new Error("the release is missing");
	const text = "[[crop_loss|apple|19103]] [[crop_loss|apple|19113]] [[crop_loss|apple|19153]] [[crop_loss|fig|19103]]";
	const map = { id: "b2", type: "map", measure: "crop_loss", crop: "apple" };
	const told = await resolveReport(content(text, [map]), found);
	const figures = told.title.en.flatMap((part) => (part.kind === "figure" ? [part.figure] : []));
	expect(
		figures.map(
			(figure) => figure && "cell" in figure && [figure.cell.status, figure.cell.value, figure.cell.steadiness],
		),
	).toEqual([["shown", 38, "care"], ["withheld", null, null], ["shown", null, "rough"], null]);
	expect(told.blocks[1]).toMatchObject({ type: "map", classes: [{ from: 38, to: 38, count: 1 }] });
	expect(told.picture?.counties).toHaveLength(99);
});

test("an id that is no id, or of no report, is not found", async () => {
	for (const id of ["x", "00000000-0000-4000-8000-000000000000"]) {
		expect(await network((trx) => findReport(trx, author, id))).toBeUndefined();
	}
	expect(
		await network((trx) => startReport(trx, author, "00000000-0000-4000-8000-000000000000", { en: say, es: say })),
	).toBeUndefined();
});

test("two reports of one title have addresses of their own", async () => {
	const slugs = [];
	for (const reportId of [await startDraft(), await startDraft()]) {
		slugs.push((await network((trx) => findReport(trx, author, reportId)))?.slug);
	}
	expect(new Set(slugs).size).toBe(2);
});
