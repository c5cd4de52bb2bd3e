import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { addDraft } from "#tests/database/drafts-fixture.ts";
import { addRelease } from "#tests/database/publish-fixture.ts";
import { addPerson } from "#tests/database/surveys-fixture.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";

// What was logged and what readers have seen stays as it is, whoever asks for a change.

let database: TestDatabase;
let owner: Client;
let app: Client;
let reader: Client;
let releaseId: string;
let personId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = new Client({ connectionString: database.ownerUrl });
	app = new Client({ connectionString: database.appUrl });
	reader = new Client({ connectionString: database.readerUrl });
	await Promise.all([owner, app, reader].map((client) => client.connect()));
	({ releaseId } = await addRelease(owner));
	({ personId } = await addPerson(owner, "Ines Rowan", ["19"]));
	await owner.query(
		"insert into log.event (person_id, action, subject_kind, subject_id) values ($1, 'survey.opened', 'survey', '1')",
		[personId],
	);
	const withdrawn = await addRelease(owner, 2030);
	await owner.query(
		`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
		[withdrawn.releaseId],
	);
	await owner.query(
		`insert into release.file (release_id, name, position, media_type, content, byte_count, sha256)
		values ($1, 'cells.csv', 0, 'text/csv', 'a', 1, encode(sha256('a'), 'hex'))`,
		[releaseId],
	);
	await owner.query("insert into release.form (release_id, version, definition) values ($1, 1, '{}')", [releaseId]);
	await owner.query("insert into log.download (person_id, release_id, file_key) values ($1, $2, 'cells.csv')", [
		personId,
		releaseId,
	]);
});
afterAll(async () => {
	await Promise.all([owner, app, reader].map((client) => client.end()));
	await database.drop();
});

async function tablesOf(schema: string): Promise<string[]> {
	const { rows } = await owner.query<{ name: string }>(
		"select schemaname || '.' || tablename as name from pg_tables where schemaname = $1 order by 1",
		[schema],
	);
	return rows.map(({ name }) => name);
}

/** Every row as the owner sees it, to compare before and after. */
async function contents(table: string): Promise<unknown[]> {
	const { rows } = await owner.query(`select to_jsonb(t) as row from ${table} t order by 1`);
	return rows;
}

/** One statement of each kind that changes or takes away, with a column that can be written at all. */
async function changesOf(table: string): Promise<string[]> {
	const { rows } = await owner.query<{ name: string }>(
		`select attname as name from pg_attribute where attrelid = $1::regclass and attnum > 0 and attidentity = ''
		order by attnum limit 1`,
		[table],
	);
	const column = rows[0]!.name;
	return [`update ${table} set ${column} = ${column}`, `delete from ${table}`, `truncate ${table} cascade`];
}

const refused = { code: "42501" };

test.each(["log", "release"])("no role of the application changes or takes away a row of schema %s", async (schema) => {
	const tables = await tablesOf(schema);
	expect(tables.length).toBeGreaterThan(1);
	for (const table of tables) {
		const before = await contents(table);
		expect(before.length, `${table} holds rows`).toBeGreaterThan(0);
		for (const change of await changesOf(table)) {
			await expect(app.query(change), `app: ${change}`).rejects.toMatchObject(refused);
			await expect(reader.query(change), `reader: ${change}`).rejects.toMatchObject(refused);
		}
		expect(await contents(table)).toEqual(before);
	}
});

test("a released figure is frozen even to the owner of its table", async () => {
	for (const table of await tablesOf("release")) {
		for (const change of await changesOf(table)) {
			await expect(owner.query(change), change).rejects.toMatchObject({
				...refused,
				message: "published_figures_are_frozen",
			});
		}
	}
});

test("the application still logs and releases, so the refusals are not for want of any right", async () => {
	await app.query(
		"insert into log.event (person_id, action, subject_kind, subject_id) values ($1, 'survey.closed', 'survey', '1')",
		[personId],
	);
	const events = await owner.query("select action from log.event order by event_id");
	expect(events.rows.map(({ action }) => action)).toEqual(["survey.opened", "survey.closed"]);
	await app.query("select set_config('tallygrove.scope', 'network', false)");
	const draftId = await addDraft(owner, {
		status: "scheduled",
		audit: { passed: true },
		checksum: "sum",
		publishedChecksum: "sum",
	});
	await app.query(
		`insert into release.release
			(release_id, season, form_key, title, rules, method, audit, code_version, checksum, series_id)
		select release_draft_id, 2032, 'after_harvest', '{}', '{}', '{}', '{}', 'test', 'sum', survey_id
		from collect.release_draft where release_draft_id = $1`,
		[draftId],
	);
	expect((await owner.query("select from release.release")).rowCount).toBe(3);
});

test("a figure for a withheld cell is refused, whoever writes it", async () => {
	const insert = `insert into release.figure (release_id, measure_key, crop_key, area_key, value, steadiness)
		values ($1, 'crop_loss', 'apple', '19113', 73, 'steady')`;
	for (const client of [app, owner]) {
		await expect(client.query(insert, [releaseId])).rejects.toMatchObject({ message: "figure_of_hidden_cell" });
	}
});

test("a draft of a report can be changed and a published report cannot, nor can either be deleted", async () => {
	const add = (slug: string) =>
		app.query(
			"insert into publish.report (slug, release_id, content, created_by, author_name) values ($1, $2, '{}', gen_random_uuid(), 'Ines Rowan')",
			[slug, releaseId],
		);
	await add("told");
	await add("half-written");
	const publish = await app.query(
		"update publish.report set state = 'published', published_by = gen_random_uuid(), published_at = now() where slug = 'told'",
	);
	expect(publish.rowCount).toBe(1);

	const change = `update publish.report set content = '{"changed": true}' where slug = $1`;
	expect((await app.query(change, ["half-written"])).rowCount).toBe(1);
	const frozen = { ...refused, message: "published_report_is_frozen" };
	await expect(app.query(change, ["told"])).rejects.toMatchObject(frozen);
	await expect(owner.query(change, ["told"])).rejects.toMatchObject(frozen);
	await expect(owner.query("delete from publish.report where slug = 'told'")).rejects.toMatchObject(frozen);
	await expect(app.query("delete from publish.report where slug = 'half-written'")).rejects.toMatchObject(refused);
	await expect(reader.query(change, ["half-written"])).rejects.toMatchObject(refused);
	expect((await reader.query("select slug from publish.report")).rows).toEqual([{ slug: "told" }]);
	expect((await owner.query("select from publish.report")).rowCount).toBe(2);
});
