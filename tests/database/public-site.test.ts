import type { Client } from "pg";
import { type LoaderFunctionArgs, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listExpected } from "#app/publish/expected.server.ts";
import { loader as calendar } from "#app/routes/public/calendar.tsx";
import { loader as about } from "#app/routes/public/about.tsx";
import { loader as home } from "#app/routes/public/home.tsx";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addDraft } from "./drafts-fixture.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

// What anybody reads first, in each state that the network can be in; the tests go on from each other in the order they stand.

let database: TestDatabase;
let owner: Client;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const run = <T>(loader: (args: never) => Promise<T>) =>
	loader({
		request: new Request("https://survey.example/"),
		context: new RouterContextProvider(),
		params: {},
	} as unknown as LoaderFunctionArgs as never);
const title = JSON.stringify({ en: "After harvest", es: "Después de la cosecha" });

test("before the first release the pages say so", async () => {
	expect(await run(home)).toMatchObject({ latest: null, gone: null, expected: [] });
	expect(await run(calendar)).toEqual({ expected: [], releases: [], reports: [] });
	expect(await run(about)).toEqual({ releases: 0, states: [], crops: [] });
});

test("an open survey is told with its states and its closing, and a closed one is not", async () => {
	const { rows } = await owner.query(
		`with f as (insert into collect.form (form_key) values ('after_harvest') returning form_id),
			v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, '{}' from f returning form_version_id)
		insert into collect.survey (form_version_id, season, title, crop_keys, opened_at, closes_at)
		select form_version_id, 2033, $1, '{apple}', now() - interval '1 day', '2099-11-01T17:00:00Z' from v returning survey_id`,
		[title],
	);
	await loadPlaces(owner);
	await owner.query("insert into collect.survey_state (survey_id, state_fips) values ($1, '19')", [rows[0].survey_id]);
	expect((await run(home)).expected).toEqual([
		{
			kind: "survey_closes",
			title: JSON.parse(title),
			season: 2033,
			at: "2099-11-01T17:00:00.000Z",
			again: false,
			stateFips: ["19"],
		},
	]);
	await owner.query("update collect.survey set closed_at = now()");
	expect(await listExpected()).toEqual([]);
});

test("approved figures are expected from their approval to their minute, and drafts without one are nobody's", async () => {
	await addDraft(owner, { status: "audited", audit: { passed: true }, checksum: "a" });
	await addDraft(owner, {
		status: "scheduled",
		audit: { passed: true },
		checksum: "b",
		publishAt: "'2099-12-01T14:00:00Z'::timestamptz",
	});
	await owner.query("update collect.survey set title = $1", [title]);
	expect(await listExpected()).toMatchObject([{ kind: "release", season: 2031, at: "2099-12-01T14:00:00.000Z" }]);
	await owner.query("update collect.release_draft set status = 'superseded' where status = 'scheduled'");
	expect(await listExpected()).toEqual([]);
});

test("an approved report is expected without a word of its own", async () => {
	const { releaseId } = await addRelease(owner, 2034);
	const { personId } = await addPerson(owner, "Iowa's associate", ["19"]);
	const approver = await addPerson(owner, "The coordinator", []);
	const content = {
		title: { en: "Plums were lost", es: "Se perdió la ciruela" },
		summary: { en: "", es: "" },
		blocks: [],
	};
	await owner.query(
		`insert into publish.report (slug, release_id, state, content, created_by, author_name, approved_by, publish_at)
		values ('plums', $1, 'scheduled', $2, $3, 'Ines Rowan', $4, '2099-12-24T14:00:00Z')`,
		[releaseId, JSON.stringify(content), personId, approver.personId],
	);
	const told = await run(calendar);
	expect(told.expected).toMatchObject([{ kind: "report", season: 2034, at: "2099-12-24T14:00:00.000Z" }]);
	expect(JSON.stringify(told)).not.toContain("lost");
});

test("the home page leads with the standing release, its finding and the cautions that its figures need", async () => {
	const { latest, cautions, gone } = await run(home);
	expect(gone).toBeNull();
	expect(latest?.release.season).toBe(2034);
	expect(latest?.finding?.cell).toMatchObject({ cropKey: "apple", value: 41 });
	expect(cautions).toEqual(["damaged_fruit", "local_advice"]);
	expect(await run(about)).toEqual({ releases: 1, states: ["19"], crops: ["apple"] });
});

test("withdrawn figures are said before older ones are shown, until newer ones stand", async () => {
	const newer = await addRelease(owner, 2035);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[newer.releaseId],
	);
	const after = await run(home);
	expect(after.latest?.release.season).toBe(2034);
	expect(after.gone).toMatchObject({ number: newer.number, season: 2035 });
	expect((await run(calendar)).releases.filter(({ withdrawnAt }) => withdrawnAt !== null)).toHaveLength(1);
	await addRelease(owner, 2036);
	expect((await run(home)).gone).toBeNull();
});
