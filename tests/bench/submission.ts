import { type Kysely, sql } from "kysely";
import { Client } from "pg";
import { setScope } from "#app/auth/scope.server.ts";
import { afterHarvest } from "#app/collect/forms/after-harvest.ts";
import { writeFacts } from "#app/tally/facts.server.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { type Bench, linesOf } from "./line.ts";
import { backendOf, medianTimes, medians, timedInBackend, type Times } from "./timing.ts";

/** As many neighbors in a county and stratum as a million operations have in 3,100 counties and 12 strata, and ten times that. */
const neighbors = [27, 270];
const strata = 40;
const samples = 40;

/**
 * One submission of the harvest form, of an operation with two crops, into a county and stratum where others have answered:
 * its facts and the tallies that they change, from the application to the database and back, without the commit.
 */
export async function submission(bench: Bench): Promise<void> {
	for (const count of neighbors) {
		await using database = await createTestDatabase();
		const owner = new Client({ connectionString: database.ownerUrl });
		await owner.connect();
		const app = connect(database.appUrl, { max: 1 });
		try {
			const { surveyId, newcomers } = await fillSurvey(owner, count);
			const of = `one submission among ${count} neighbors`;
			const goal = "under 5";
			const first = await timeEach(app, newcomers);
			bench.print(...linesOf({ name: `facts and tallies of ${of}`, times: first, goal }));
			await owner.query(correction, [submitted(1500)]);
			const corrected = await timeEach(app, newcomers);
			bench.print(...linesOf({ name: `facts and tallies of ${of}, corrected`, times: corrected, goal }));
			const pid = await backendOf(owner);
			const { rebuild } = await medians(3, {
				rebuild: () => timedInBackend(pid, () => owner.query("select collect.retally_survey($1)", [surveyId])),
			});
			const responses = (count * strata + samples).toLocaleString("en");
			bench.print(...linesOf({ name: `rebuild of ${responses} responses beside ${of}`, times: rebuild, floor: first }));
		} finally {
			await Promise.all([owner.end(), app.destroy()]);
		}
	}
}

type Newcomer = { operation_id: string; response_id: string };

async function timeEach(app: Kysely<DB>, newcomers: Newcomer[]): Promise<Times> {
	const times: Times[] = [];
	for (const { operation_id, response_id } of newcomers) {
		await app.transaction().execute(async (trx) => {
			await setScope(trx, { kind: "grower", operationIds: [operation_id] });
			const { rows } = await sql<{ pid: number }>`select pg_backend_pid() as pid`.execute(trx);
			times.push(await timedInBackend(rows[0]!.pid, () => writeFacts(trx, response_id)));
		});
	}
	return medianTimes(times.slice(1));
}

/** A survey in which all neighbors have facts and tallies, and the newcomers have sent in and have none yet. */
async function fillSurvey(owner: Client, count: number): Promise<{ surveyId: string; newcomers: Newcomer[] }> {
	const { rows: surveys } = await owner.query<{ survey_id: string }>(
		`with f as (insert into collect.form (form_key) values ('after_harvest') returning form_id),
			v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, $1 from f returning form_version_id)
		insert into collect.survey (form_version_id, season, title, crop_keys, closes_at, opened_at)
		select form_version_id, 2031, '{}', '{apple,plum}', now() + interval '1 day', now() from v returning survey_id`,
		[JSON.stringify(afterHarvest)],
	);
	const surveyId = surveys[0]!.survey_id;
	await owner.query(operations, [surveyId, count * strata + samples, strata]);
	const { rows } = await owner.query<Newcomer>(responses, [surveyId, samples, submitted(1000)]);
	await owner.query("alter table collect.fact disable trigger user");
	await owner.query(facts, [surveyId, afterHarvest.measures.map(({ key }) => key), ["apple", "plum", "all"]]);
	await owner.query("alter table collect.fact enable trigger user");
	await owner.query("select collect.retally_survey($1)", [surveyId]);
	await owner.query("vacuum analyze");
	return { surveyId, newcomers: rows };
}

const operations = `with o as (insert into directory.owner (name) select 'Ada Quill' from generate_series(1, $2::int) returning owner_id),
	p as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name)
		select owner_id, 'Quail Bend Orchard', '19103', '19', 'Ada Quill' from o returning operation_id, owner_id)
	insert into collect.frame_operation (survey_id, operation_id, owner_id, county_fips, state_fips, size_class, stratum_key)
	select $1, operation_id, owner_id, '19103', '19', 'small', '19:' || row_number() over () % $3 from p`;

const responses = `with r as (
		insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
		select survey_id, operation_id, '19', 'en', '1' from collect.frame_operation where survey_id = $1 limit $2
		returning response_id, operation_id),
	s as (insert into collect.submission (response_id, version, answers) select response_id, 1, $3 from r)
	select response_id, operation_id from r`;

const correction =
	"insert into collect.submission (response_id, version, answers) select response_id, 2, $1 from collect.response";

/** Everybody but the newcomers, with every measure of both crops and of all. */
const facts = `insert into collect.fact (survey_id, operation_id, owner_id, county_fips, state_fips, stratum_key, measure_key,
		crop_key, y, x)
	select survey_id, operation_id, owner_id, county_fips, state_fips, stratum_key, measure, crop, 1000 * random(), 5000 * random()
	from collect.frame_operation f, unnest($2::text[]) measure, unnest($3::text[]) crop
	where survey_id = $1 and not exists (select from collect.response r where r.operation_id = f.operation_id)`;

const answer = (questionKey: string, value: number, plantingId: string | null) => ({
	questionKey,
	plantingId,
	kind: "given",
	value,
	given: null,
});

/** What a grower of apples and plums sent in. */
function submitted(harvested: number): string {
	const plantings = ["apple", "plum"].map((cropKey) => ({
		plantingId: crypto.randomUUID(),
		cropKey,
		bearingTrees: 40,
	}));
	const told = { bearing_trees: 40, normal_crop: 4000, harvested };
	const answers = [
		...plantings.flatMap(({ plantingId }) =>
			Object.entries(told).map(([key, value]) => answer(key, value, plantingId)),
		),
		answer("cause_freeze", 100, null),
	];
	return JSON.stringify({ plantings, answers });
}
