import type { Client } from "pg";
import { afterAll, beforeAll, expect, test, vi } from "vitest";
import { countRead, flushReads } from "#app/auth/report-reads.server.ts";
import { countTaken, flushTaken } from "#app/auth/taken-files.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { readImpact } from "#app/jobs/impact.server.ts";
import { log } from "#app/lib/log.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addRelease } from "./publish-fixture.ts";
import { addOperation, addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let coordinator: Coordinator;
let reportId: string;
const season = 2026;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	coordinator = { ...(await addPerson(owner, "Marit Osgood", [])), role: "coordinator" } as unknown as Coordinator;
	const { releaseId } = await addRelease(owner, season);
	const { rows } = await owner.query(
		`insert into publish.report (slug, release_id, content, created_by, author_name)
		values ('told', $1, '{}', $2, 'Ines Rowan') returning report_id`,
		[releaseId, coordinator.personId],
	);
	reportId = rows[0].report_id;
	await owner.query(
		`update publish.report set state = 'published', published_by = gen_random_uuid(), published_at = now()`,
	);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const impact = () => scopedTransaction({ kind: "desk", stateFips: [] }, (trx) => readImpact(trx, coordinator));
const ofSeason = async (year: number) => (await impact()).seasons.find((told) => told.season === year);
const visit = (userAgent: string) =>
	new Request("https://survey.example/reports/told", { headers: { "user-agent": userAgent } });
const browser = "Mozilla/5.0 (Windows NT 10.0; Win64; x64; rv:140.0) Gecko/20100101 Firefox/140.0";

test("reads of a report add up by day and kind, those of robots do not, and nothing is kept of who read", async () => {
	for (let time = 0; time < 3; time++) countRead(visit(browser), reportId);
	countRead(visit("Examplebot/2.1 (+https://bot.example/)"), reportId);
	countRead(visit(browser), reportId, "pdf");
	await flushReads();
	countRead(visit(browser), reportId);
	await flushReads();
	await flushReads();
	expect(await ofSeason(season)).toMatchObject({ reads: 4, pdfs: 1, reports: 1 });
	const { rows } = await owner.query("select to_jsonb(r) as row from readership.report_read r order by kind");
	expect(rows.map(({ row }) => Object.keys(row).toSorted())).toEqual(
		[1, 2].map(() => ["kind", "read_on", "report_id", "times"]),
	);
});

test("a count that cannot be written fails nobody and is written with the next", async () => {
	const warn = vi.spyOn(log, "warn").mockImplementation(() => undefined);
	const before = (await ofSeason(season))?.reads ?? 0;
	await owner.query("alter table readership.report_read rename to away");
	countRead(visit(browser), reportId);
	await flushReads();
	expect(warn).toHaveBeenCalledOnce();
	await owner.query("alter table readership.away rename to report_read");
	await flushReads();
	expect((await ofSeason(season))?.reads).toBe(before + 1);
	warn.mockRestore();
});

test("growers reached count once a season, answers once a survey, and who does not belong not at all", async () => {
	const operations = [];
	for (const state of ["19", "19", "55"] as const) operations.push(await addOperation(owner, { state }));
	const [one, two, three] = operations as [string, string, string];
	for (const title of ["A", "B"])
		await owner.query(
			`with f as (insert into collect.form (form_key) values ('form_' || lower($1)) returning form_id),
				v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, '{}' from f
					returning form_version_id),
				s as (insert into collect.survey (form_version_id, season, title, crop_keys, closes_at, opened_at)
				select form_version_id, 2040, jsonb_build_object('en', $1::text, 'es', $1::text), '{apple}', now() + '1 day', now()
				from v returning survey_id)
			insert into collect.frame_operation (survey_id, operation_id, owner_id, county_fips, state_fips, size_class,
				stratum_key, disposition)
			select survey_id, operation_id, owner_id, county_fips, state_fips, 'small', state_fips || ':small',
				case when operation_id = $2 then 'complete' when operation_id = $3 then 'not_reached' else 'not_eligible' end
			from s, directory.operation where operation_id = any ($4)`,
			[title, one, two, operations],
		);
	expect(three).toBeDefined();
	const told = await ofSeason(2040);
	expect(told).toMatchObject({ surveys: 2, reached: 2, answers: 2, counties: null, reports: null });
	expect(told?.responseRate).toBeCloseTo(50, 9);
	expect((await impact()).seasons.map((one_) => one_.season)[0]).toBe(2040);
});

test("what stands counts counties; withdrawn figures show none; the coordinator still reads no operation", async () => {
	const shown = (await ofSeason(season))?.counties ?? 0;
	expect(shown).toBeGreaterThan(0);
	const withdrawn = await addRelease(owner, 2027);
	expect((await ofSeason(2027))?.counties).toBe(shown);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[withdrawn.releaseId],
	);
	expect(await ofSeason(2027)).toMatchObject({ counties: 0, releases: 1 });
	const seen = await scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		await readImpact(trx, coordinator);
		return trx.selectFrom("collect.frame_operation").select("operation_id").execute();
	});
	expect(seen).toEqual([]);
	expect(await count(owner, "collect.frame_operation")).toBeGreaterThan(0);
});

test("files taken from the open pages add up by day and file: whole ones, by people, and nothing of who took them", async () => {
	const { releaseId } = await addRelease(owner, 2029);
	const take = (status: number, init: RequestInit = {}, agent = browser) =>
		countTaken(
			new Request("https://survey.example/api/v1/releases/1/files/cells.csv", {
				...init,
				headers: { "user-agent": agent },
			}),
			new Response(null, { status }),
			releaseId,
			"cells.csv",
		);
	take(200);
	take(200);
	// Looked at first, asked again whether it is the same, gone on with, and not had at all.
	take(200, { method: "HEAD" });
	take(304);
	take(206);
	take(416);
	take(200, {}, "Examplebot/2.1 (+https://bot.example/)");
	take(200, {}, "");
	await flushTaken();
	take(200);
	await flushTaken();
	expect(await ofSeason(2029)).toMatchObject({ downloads: 3 });
	const { rows } = await owner.query("select to_jsonb(t) as row from readership.file_taken t");
	expect(rows.map(({ row }) => [row.file_name, row.times])).toEqual([["cells.csv", 3]]);
	expect(Object.keys(rows[0].row).toSorted()).toEqual(["file_name", "release_id", "taken_on", "times"]);
	expect((await impact()).now.filesSince).toBe(rows[0].row.taken_on);
});

test("subscribers, members, mails and downloads are those that are there", async () => {
	await owner.query(
		`with s as (insert into readership.subscriber (email, language) values ('a@b.example', 'en'), ('c@d.example', 'es')
			returning subscriber_id, email)
		insert into readership.mailing (report_id, subscriber_id, sent_at)
		select $1, subscriber_id, case when email like 'a%' then now() end from s`,
		[reportId],
	);
	await owner.query("insert into auth.role_grant (person_id, role) values ($1, 'researcher')", [coordinator.personId]);
	await owner.query(
		`insert into log.download (person_id, release_id, file_key)
		select $1, release_id, 'cells.csv' from release.release where season = $2`,
		[coordinator.personId, season],
	);
	expect((await impact()).now).toMatchObject({ subscribers: 2, members: 1 });
	expect(await ofSeason(season)).toMatchObject({ mails: 1, downloads: 1 });
});
