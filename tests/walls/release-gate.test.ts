import { randomUUID } from "node:crypto";
import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { addDraft, type NewDraft } from "#tests/database/drafts-fixture.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";

// What has not passed its audit is not published, by whichever statement and role.

let database: TestDatabase;
let owner: Client;
let app: Client;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = new Client({ connectionString: database.ownerUrl });
	app = new Client({ connectionString: database.appUrl });
	await Promise.all([owner.connect(), app.connect()]);
	// As the pages of the network and of the desk connect, which see every draft.
	await app.query("select set_config('tallygrove.scope', 'network', false)");
});
afterAll(async () => {
	await Promise.all([owner.end(), app.end()]);
	await database.drop();
});

const passed = { passed: true };
const sums = { checksum: "sum of all", publishedChecksum: "sum" };
async function release(client: Client, releaseId: string, checksum = "sum") {
	const draft = await owner.query("select survey_id from collect.release_draft where release_draft_id = $1", [
		releaseId,
	]);
	return client.query(
		`insert into release.release
			(release_id, season, form_key, title, rules, method, audit, code_version, checksum, series_id)
		values ($1, 2032, 'after_harvest', '{}', '{}', '{}', '{"passed": true}', 'test', $2, $3)`,
		[releaseId, checksum, draft.rows[0]?.survey_id ?? randomUUID()],
	);
}
const refused = { message: "release_not_audited" };

test.each<[string, NewDraft]>([
	["whose audit failed", { status: "audit_failed", audit: { passed: false }, ...sums }],
	["that claims in its audit what its status does not", { status: "audit_failed", audit: passed, ...sums }],
	["not computed yet", { status: "queued" }],
	["that a job gave up", { status: "failed" }],
	["that was sent back", { status: "rejected", audit: passed, ...sums }],
	["that a newer one took the place of", { status: "superseded", audit: passed, ...sums }],
	["that nobody has approved", { status: "audited", audit: passed, ...sums }],
	[
		"whose minute has not come",
		{ status: "scheduled", audit: passed, ...sums, publishAt: "now() + interval '1 minute'" },
	],
	["published before", { status: "approved", audit: passed, ...sums }],
])("a draft %s is no release, for the application and for the owner of the tables", async (_told, draft) => {
	const draftId = await addDraft(owner, draft);
	for (const client of [app, owner]) await expect(release(client, draftId)).rejects.toMatchObject(refused);
});

test("an approved draft is one, though not with other cells than were audited, and nothing else is", async () => {
	const draftId = await addDraft(owner, { status: "scheduled", audit: passed, ...sums });
	await expect(release(app, draftId, "another")).rejects.toMatchObject(refused);
	// The sum of the whole draft, with its exact counts, is not what a release tells.
	await expect(release(app, draftId, "sum of all")).rejects.toMatchObject(refused);
	await expect(release(app, randomUUID())).rejects.toMatchObject(refused);
	await expect(release(app, draftId)).resolves.toMatchObject({ rowCount: 1 });
});

test("who sees no draft publishes none", async () => {
	const draftId = await addDraft(owner, { status: "scheduled", audit: passed, ...sums });
	const stranger = new Client({ connectionString: database.appUrl });
	await stranger.connect();
	try {
		await expect(release(stranger, draftId)).rejects.toMatchObject(refused);
	} finally {
		await stranger.end();
	}
});

test("no draft is called audited or approved without an audit that passed", async () => {
	for (const status of ["audited", "scheduled", "approved"]) {
		for (const audit of [null, { passed: false }]) {
			await expect(addDraft(owner, { status, audit })).rejects.toMatchObject({ code: "23514" });
		}
	}
	const waiting = await addDraft(owner, { status: "audit_failed", audit: { passed: false } });
	await expect(
		owner.query("update collect.release_draft set status = 'audited' where release_draft_id = $1", [waiting]),
	).rejects.toMatchObject({ constraint: "release_draft_audited_passed" });
});

test("a cell is shown only where the audited draft shows it", async () => {
	const draftId = await addDraft(owner, { status: "scheduled", audit: passed, ...sums });
	await owner.query(
		`insert into collect.release_draft_cell (release_draft_id, crop_key, area_key, status, respondents, figures) values
			($1, 'apple', '19', 'shown', 9, '[]'), ($1, 'apple', '19103', 'withheld', null, null)`,
		[draftId],
	);
	await release(app, draftId);
	await app.query(
		`insert into release.area (release_id, area_key, kind, name) values ($1, '19', 'state', 'Iowa'),
			($1, '19103', 'county', 'Johnson'), ($1, '19113', 'county', 'Linn')`,
		[draftId],
	);
	const cell = (area: string, status: string) =>
		app.query(
			"insert into release.cell (release_id, crop_key, area_key, status, respondents_band) values ($1, 'apple', $2, $3, $4)",
			[draftId, area, status, status === "shown" ? "5-9" : null],
		);
	await expect(cell("19103", "shown")).rejects.toMatchObject({ message: "cell_not_as_audited" });
	await expect(cell("19113", "shown")).rejects.toMatchObject({ message: "cell_not_as_audited" });
	await cell("19", "shown");
	await cell("19103", "withheld");
	expect((await owner.query("select from release.cell where release_id = $1", [draftId])).rowCount).toBe(2);
});
