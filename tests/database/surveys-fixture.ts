import { Client } from "pg";
import { afterAll } from "vitest";
import type { Trx } from "#app/auth/scope.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { SurveyDraft } from "#app/collect/survey-draft.schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";

/** Points the application's settings at a test's own database; read once a process, so before anything else. */
export function useDatabase(urls: { appUrl: string; readerUrl: string }, more: Record<string, string> = {}): void {
	Object.assign(process.env, {
		BASE_URL: "https://survey.example",
		DATABASE_URL: urls.appUrl,
		DATABASE_READER_URL: urls.readerUrl,
		SESSION_SECRET: "only-for-tests-only-for-tests-only",
		SMTP_URL: "smtp://127.0.0.1:9",
		MAIL_FROM: "Four Rivers Fruit Network <survey@fourrivers.example>",
		OAUTH_ISSUER: "http://127.0.0.1:9",
		OAUTH_CLIENT_ID: "tallygrove",
		OAUTH_CLIENT_SECRET: "only-for-tests",
		...more,
	});
}

/** The owner's connection, which no row-level security narrows: what is really there. */
export async function connectOwner(ownerUrl: string): Promise<Client & AsyncDisposable> {
	const client = new Client({ connectionString: ownerUrl });
	await client.connect();
	return Object.assign(client, { [Symbol.asyncDispose]: () => client.end() });
}

export async function loadPlaces(owner: Client): Promise<void> {
	await owner.query(`insert into directory.state values ('19','Iowa','IA','America/Chicago'), ('55','Wisconsin','WI','America/Chicago')
		on conflict do nothing`);
	await owner.query(`insert into directory.county (county_fips, state_fips, name)
		values ('19103','19','Johnson'), ('55025','55','Dane') on conflict do nothing`);
	await owner.query(
		`insert into directory.crop values ('apple', 1, 'tree', 48), ('plum', 3, 'tree', 56) on conflict do nothing`,
	);
}

export async function addPerson(owner: Client, name: string, stateFips: string[]): Promise<Associate> {
	const { rows } = await owner.query(
		"insert into auth.person (issuer, subject, display_name) values ('https://id.example', gen_random_uuid()::text, $1) returning person_id",
		[name],
	);
	return { role: "associate", personId: rows[0].person_id, displayName: name, email: null, language: null, stateFips };
}

/** A database of the test file's own with two states and their associates, until the file's last test has run. */
export async function openSurveysDatabase() {
	const database = await createTestDatabase();
	useDatabase(database);
	const owner = await connectOwner(database.ownerUrl);
	afterAll(async () => {
		await owner.end();
		await database.drop();
	});
	await loadPlaces(owner);
	return {
		owner,
		ownerUrl: database.ownerUrl,
		iowa: await addPerson(owner, "Iowa's associate", ["19"]),
		other: await addPerson(owner, "Iowa's other associate", ["19"]),
		wisconsin: await addPerson(owner, "Wisconsin's associate", ["55"]),
		both: await addPerson(owner, "Associate of both", ["19", "55"]),
	};
}

export type NewOperation = {
	state: "19" | "55";
	name?: string;
	contact?: string;
	email?: string | null;
	language?: "en" | "es";
	trees?: number;
	crop?: string;
	status?: "active" | "left";
	removedOn?: string | null;
};

export async function addOperation(owner: Client, given: NewOperation): Promise<string> {
	const county = given.state === "19" ? "19103" : "55025";
	const { rows } = await owner.query(
		`with o as (insert into directory.owner (name) values ($1) returning owner_id)
		insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email, language, status)
		select owner_id, $1, $2, $3, $4, $5, $6, $7 from o returning operation_id`,
		[
			given.name ?? "Quail Bend Orchard",
			county,
			given.state,
			given.contact ?? "Ada Quill",
			given.email === undefined ? "ada@quailbend.example" : given.email,
			given.language ?? "en",
			given.status ?? "active",
		],
	);
	const operationId = rows[0].operation_id as string;
	await owner.query(
		"insert into directory.planting (operation_id, crop_key, bearing_trees, removed_on) values ($1, $2, $3, $4)",
		[operationId, given.crop ?? "apple", given.trees ?? 40, given.removedOn ?? null],
	);
	return operationId;
}

export const draftOf = (states: string[], more: Partial<SurveyDraft> = {}): SurveyDraft => ({
	formKey: "after_harvest",
	season: 2031,
	titleEn: "After harvest",
	titleEs: "Después de la cosecha",
	crops: ["apple"],
	states,
	closesOn: new Date(Date.now() + 30 * 86_400_000).toISOString().slice(0, 10),
	closesAt: "17:00",
	...more,
});

/** A transaction as the desk's guard opens it. */
export function asDesk<T>(viewer: Associate, work: (trx: Trx) => Promise<T>): Promise<T> {
	return scopedTransaction({ kind: "desk", stateFips: viewer.stateFips }, work);
}

export async function count(owner: Client, query: string, values: unknown[] = []): Promise<number> {
	const { rows } = await owner.query(`select count(*)::int as n from ${query}`, values);
	return rows[0].n as number;
}

/** Marks an operation as having answered, as a submission leaves it. */
export async function answerFor(
	owner: Client,
	surveyId: string,
	operationId: string,
	language = "en",
): Promise<string> {
	const { rows } = await owner.query(
		`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version, submitted_version,
			receipt_code, first_submitted_at, submitted_at)
		select $1, $2, state_fips, $3, '1', 1, upper(substr(md5(random()::text), 1, 8)), now(), now()
		from directory.operation where operation_id = $2 returning receipt_code`,
		[surveyId, operationId, language],
	);
	await owner.query(
		"update collect.frame_operation set disposition = 'complete' where survey_id = $1 and operation_id = $2",
		[surveyId, operationId],
	);
	return rows[0].receipt_code as string;
}
