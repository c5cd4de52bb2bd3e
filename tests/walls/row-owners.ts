import type { Client } from "pg";
import { addOperation, addPerson, loadPlaces } from "#tests/database/surveys-fixture.ts";

/** One operation and the keys by which its rows are found in every table that holds some. */
export type Holder = {
	operation_id: string;
	owner_id: string;
	response_id: string;
	edit_finding_id: string;
	release_draft_id: string;
	import_id: string;
	/** Of a measure that nobody else has facts of, so that its tally is this operation's alone. */
	measure_key: string;
	/** Of a stratum that nobody else is in. */
	stratum_key: string;
};
type Row = Omit<Holder, "import_id">;
export type Holders = { iowa: Holder; neighbor: Holder; wisconsin: Holder };

/**
 * Three operations, two of Iowa and one of Wisconsin, in one survey of both states, each with a row in every table that
 * holds rows of growers. Written as owner, so all is really there, whatever a scope sees of it.
 */
export async function fillWithHolders(owner: Client): Promise<Holders> {
	await loadPlaces(owner);
	const { personId } = await addPerson(owner, "Ines Rowan", ["19"]);
	const surveyId = await addSurvey(owner);
	const draftId = await idOf(
		owner,
		"insert into collect.release_draft (survey_id, rules, drafted_by) values ($1, '{}', $2) returning release_draft_id as id",
		[surveyId, personId],
	);
	await owner.query(
		"insert into collect.release_draft_cell (release_draft_id, crop_key, area_key, status) values ($1, 'apple', '19103', 'withheld')",
		[draftId],
	);
	const add = async (state: "19" | "55") => addHolder(owner, { surveyId, draftId, personId }, state);
	const [iowa, neighbor, wisconsin] = [await add("19"), await add("19"), await add("55")];
	const work = async (holder: Row, state: string, other: Row) => ({
		...holder,
		import_id: await addListWork(owner, personId, state, holder.operation_id, other.operation_id),
	});
	return {
		iowa: await work(iowa, "19", neighbor),
		neighbor: await work(neighbor, "19", wisconsin),
		wisconsin: await work(wisconsin, "55", iowa),
	};
}

async function addSurvey(owner: Client): Promise<string> {
	return idOf(
		owner,
		`with f as (insert into collect.form (form_key) values ('walls') returning form_id),
			v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, '{}' from f returning form_version_id),
			s as (insert into collect.survey (form_version_id, season, title, crop_keys, closes_at, opened_at)
				select form_version_id, 2031, '{}', '{apple}', now() + interval '1 day', now() from v returning survey_id)
		insert into collect.survey_state select survey_id, state from s, unnest(array['19', '55']) state returning survey_id as id`,
	);
}

/** What the desk keeps beside the list: a merge with another, a pair that is two, an import with a row, a contact. */
async function addListWork(owner: Client, personId: string, state: string, operationId: string, otherId: string) {
	const ids = [operationId, otherId, personId];
	await owner.query("insert into directory.merge (operation_id, dropped_id, merged_by) values ($1, $2, $3)", ids);
	await owner.query("insert into directory.distinct_pair (operation_id, other_id, said_by) values ($1, $2, $3)", ids);
	await owner.query(
		"insert into collect.contact (operation_id, person_id, way, outcome) values ($1, $2, 'telephone', 'reached')",
		[operationId, personId],
	);
	const importId = await idOf(
		owner,
		"insert into directory.import (person_id, state_fips, file_name) values ($1, array[$2], 'list.csv') returning import_id as id",
		[personId, state],
	);
	await owner.query("insert into directory.import_row (import_id, row_number, operation_id) values ($1, 2, $2)", [
		importId,
		operationId,
	]);
	return importId;
}

type Shared = { surveyId: string; draftId: string; personId: string };

async function addHolder(owner: Client, { surveyId, draftId, personId }: Shared, state: "19" | "55"): Promise<Row> {
	const operationId = await addOperation(owner, { state });
	const ownerId = await idOf(owner, "select owner_id as id from directory.operation where operation_id = $1", [
		operationId,
	]);
	await owner.query(
		`insert into collect.frame_operation (survey_id, operation_id, owner_id, county_fips, state_fips, size_class, stratum_key)
		select $1, operation_id, owner_id, county_fips, state_fips, 'small', operation_id::text
		from directory.operation where operation_id = $2`,
		[surveyId, operationId],
	);
	await owner.query("insert into directory.operation_pin values ($1, -91.5, 41.6)", [operationId]);
	const ids = [surveyId, operationId];
	await owner.query("insert into collect.frame_crop values ($1, $2, 'apple', 40)", ids);
	const mailingId = await idOf(
		owner,
		"insert into collect.mailing (survey_id, operation_id, kind) values ($1, $2, 'invitation') returning mailing_id as id",
		ids,
	);
	await owner.query(
		"insert into collect.personal_link (survey_id, operation_id, token_hash, expires_at) values ($1, $2, gen_random_uuid()::text, now())",
		ids,
	);
	const measureKey = `loss_${operationId}`;
	await owner.query(
		`insert into collect.fact select survey_id, $3, 'apple', operation_id, owner_id, county_fips, state_fips,
			stratum_key, 120, 400 from collect.frame_operation where survey_id = $1 and operation_id = $2`,
		[...ids, measureKey],
	);
	const responseId = await idOf(
		owner,
		`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version, submitted_version,
			receipt_code, first_submitted_at, submitted_at)
		values ($1, $2, $3, 'en', '1', 1, 'R-' || $2::uuid, now(), now()) returning response_id as id`,
		[...ids, state],
	);
	await owner.query(
		"insert into collect.answer (response_id, question_key, kind, value) values ($1, 'harvested', 'given', '280')",
		[responseId],
	);
	await owner.query("insert into collect.submission (response_id, version, answers) values ($1, 1, '{}')", [
		responseId,
	]);
	await owner.query(
		`insert into collect.late_decision (response_id, version, taken, reason, decided_by)
		select $1, 1, true, 'on the road', person_id from auth.person limit 1`,
		[responseId],
	);
	await owner.query(
		`insert into collect.entry_draft (survey_id, operation_id, person_id, mode, typed)
		select $1, $2, person_id, 'telephone', '{}' from auth.person limit 1`,
		ids,
	);
	await owner.query(
		`insert into collect.photo (photo_id, response_id, question_key, file_name, width_px, height_px, size_bytes)
		values (gen_random_uuid(), $1::uuid, 'photos', md5($1::uuid::text), 1600, 1200, 400000)`,
		[responseId],
	);
	await owner.query(
		`insert into collect.release_draft_holding (release_draft_id, owner_id, county_fips, crop_key, amounts, digest)
		values ($1, $2, '19103', 'apple', '{}', 'sum')`,
		[draftId, ownerId],
	);
	const findingId = await addFinding(owner, responseId, mailingId, personId);
	await owner.query(
		`insert into collect.word_told select response_id, 'other_cause', null, survey_id, operation_id, state_fips, county_fips,
			'late frost', null from collect.response join collect.frame_operation using (survey_id, operation_id, state_fips)
		where response_id = $1`,
		[responseId],
	);
	return {
		operation_id: operationId,
		owner_id: ownerId,
		response_id: responseId,
		edit_finding_id: findingId,
		release_draft_id: draftId,
		measure_key: measureKey,
		stratum_key: operationId,
	};
}

/** A finding with its first step, what was asked about it and what it was corrected to. */
async function addFinding(owner: Client, responseId: string, mailingId: string, personId: string): Promise<string> {
	const findingId = await idOf(
		owner,
		`insert into collect.edit_finding (response_id, check_kind, check_key, question_key, about, about_key)
		values ($1, 'range', 'harvested_higher', 'harvested', '[]', 'none') returning edit_finding_id as id`,
		[responseId],
	);
	await owner.query("insert into collect.edit_finding_step (edit_finding_id, step) values ($1, 'made')", [findingId]);
	await owner.query(
		"insert into collect.edit_question (edit_finding_id, mailing_id, asked_by, expires_at) values ($1, $2, $3, now())",
		[findingId, mailingId, personId],
	);
	await owner.query(
		`insert into collect.correction (response_id, question_key, act, was, made_by)
		values ($1, 'harvested', 'set_aside', '{}', $2)`,
		[responseId, personId],
	);
	return findingId;
}

async function idOf(owner: Client, query: string, values: unknown[] = []): Promise<string> {
	const { rows } = await owner.query<{ id: string }>(query, values);
	return rows[0]!.id;
}
