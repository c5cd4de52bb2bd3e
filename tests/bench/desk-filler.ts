import type { Client } from "pg";
import { afterHarvest } from "#app/collect/forms/after-harvest.ts";

export type FilledDesk = { personId: string; surveyId: string; states: string[] };

/** Of reference counties, so that there are districts. */
const states = ["17", "19"];

/**
 * A desk with `size` operations in one associate's states: an open survey that asks all of them, the same of the season before,
 * three in five answers in, with facts and tallies, odd answers, words to code, contacts, mails and a log. Written as the
 * owner, past the triggers; what they would have kept is then made from nothing. Nothing is analyzed but what the product itself
 * has analyzed in such steps.
 */
export async function fillDesk(owner: Client, size: number): Promise<FilledDesk> {
	await owner.query("select setseed(0.2031)");
	const { rows } = await owner.query<{ person_id: string }>(
		`insert into auth.person (issuer, subject, display_name)
		values ('https://id.example', 'desk', 'Del Fenwick') returning person_id`,
	);
	const personId = rows[0]!.person_id;
	await owner.query(
		`insert into auth.role_grant (person_id, role, state_fips)
		select $1::uuid, 'associate', unnest($2::text[]) union all select $1::uuid, 'coordinator', null`,
		[personId, states],
	);
	await owner.query(operations, [size, states]);
	// As a large import does.
	await owner.query("select directory.know_operations()");
	const [last, surveyId] = (
		await owner.query<{ survey_id: string }>(surveys, [JSON.stringify(afterHarvest), personId])
	).rows.map(({ survey_id }) => survey_id) as [string, string];
	const kept = ["frame_operation", "frame_crop", "response", "submission", "fact"];
	for (const table of kept) await owner.query(`alter table collect.${table} disable trigger user`);
	for (const survey of [last, surveyId]) {
		await owner.query("insert into collect.survey_state select $1::uuid, unnest($2::text[])", [survey, states]);
		await owner.query(frame, [survey]);
		await owner.query(frameCrops, [survey]);
		// As whoever opens a survey does.
		await owner.query("select collect.know_frames()");
		await owner.query(responses, [survey]);
		await owner.query(submissions, [survey]);
		await owner.query(facts, [survey, afterHarvest.measures.map(({ key }) => key)]);
	}
	for (const table of kept) await owner.query(`alter table collect.${table} enable trigger user`);
	for (const survey of [last, surveyId])
		await owner.query(
			"select collect.recount_frame($1), collect.recount_answers($1), collect.recount_words($1), collect.retally_survey($1)",
			[survey],
		);
	for (const query of [findings, contacts, mailings]) await owner.query(query, [surveyId, personId]);
	await owner.query(events, [personId, size * 2]);
	await owner.query(
		`insert into directory.saved_view (person_id, name, query) select $1::uuid, 'View ' || i, '{}' from generate_series(1, 20) i`,
		[personId],
	);
	return { personId, surveyId, states };
}

const operations = `with county as (select county_fips, state_fips, row_number() over (order by county_fips) - 1 as k,
		count(*) over () as of from directory.county where state_fips = any ($2::text[])),
	n as (select i, gen_random_uuid() as owner_id, gen_random_uuid() as operation_id, c.county_fips, c.state_fips
		from generate_series(1, $1::int) i join county c on c.k = i % c.of),
	w as (insert into directory.owner (owner_id, name) select owner_id, 'Owner ' || i from n),
	o as (insert into directory.operation (operation_id, owner_id, name, county_fips, state_fips, contact_name, email, phone)
		select operation_id, owner_id, (array['Quail Bend', 'Otter Slough', 'Stony Ford', 'Heron Rise', 'Fox Hollow'])[i % 5 + 1]
			|| ' Orchard ' || i, county_fips, state_fips, 'Contact ' || i,
			case when i % 8 > 0 then 'grower' || i || '@orchards.example' end, case when i % 4 > 0 then '555 01' || i end
		from n)
	insert into directory.planting (operation_id, crop_key, bearing_trees)
	select operation_id, 'apple', 1 + (i * 7919 % 2000) from n
	union all select operation_id, 'plum', 1 + i % 40 from n where i % 3 = 0`;

const surveys = `with f as (insert into collect.form (form_key) values ('after_harvest') returning form_id),
		v as (insert into collect.form_version (form_id, version, definition) select form_id, 1, $1 from f returning form_version_id)
	insert into collect.survey (form_version_id, season, title, crop_keys, created_by, opened_at, closes_at, closed_at)
	select form_version_id, season, '{"en": "After harvest", "es": "Después de la cosecha"}', '{apple,plum}', $2::uuid,
		now() - interval '20 days' - (2031 - season) * interval '1 year',
		now() + interval '20 days' - (2031 - season) * interval '1 year',
		case when season = 2030 then now() - interval '340 days' end
	from v, unnest('{2030,2031}'::int[]) season returning survey_id`;

const number = "substr(w.name, 7)::int";

const frame = `insert into collect.frame_operation (survey_id, operation_id, owner_id, county_fips, state_fips, size_class,
		stratum_key, disposition)
	select $1::uuid, o.operation_id, o.owner_id, o.county_fips, o.state_fips, c.class, s.postal || ':' || c.class,
		case when ${number} % 5 < 3 then 'complete' else (array['not_reached', 'not_reached', 'reached', 'partial',
			'undeliverable', 'refused', 'not_eligible'])[${number} % 7 + 1] end
	from directory.operation o join directory.owner w using (owner_id) join directory.state s using (state_fips)
		cross join lateral (select case when ${number} % 10 = 0 then 'large' when ${number} % 3 = 0 then 'medium'
			else 'small' end as class) c`;

const frameCrops = `insert into collect.frame_crop (survey_id, operation_id, crop_key, bearing_trees)
	select $1::uuid, operation_id, crop_key, bearing_trees from directory.planting`;

const responses = `insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version,
		submitted_version, receipt_code, first_submitted_at, submitted_at)
	select survey_id, operation_id, state_fips, 'en', '1', sent::int, case when sent then md5(survey_id::text || operation_id) end,
		case when sent then s.opened_at + day * interval '1 day' end, case when sent then s.opened_at + day * interval '1 day' end
	from collect.frame_operation f join collect.survey s using (survey_id)
		cross join lateral (select f.disposition = 'complete' as sent, 20 * random() as day) a
	where survey_id = $1 and disposition in ('complete', 'partial')`;

/** One in ten names a cause in words of its own. */
const submissions = `insert into collect.submission (response_id, version, answers)
	select r.response_id, 1, jsonb_build_object('plantings', p.plantings, 'answers', p.answers || case when random() < 0.1
		then jsonb_build_array(jsonb_build_object('questionKey', 'other_cause', 'plantingId', null, 'kind', 'given',
			'value', 'late frost ' || (100 * random())::int, 'given', null)) else '[]' end)
	from collect.response r cross join lateral (select
			jsonb_agg(jsonb_build_object('plantingId', planting_id, 'cropKey', crop_key, 'bearingTrees', bearing_trees)) as plantings,
			jsonb_agg(jsonb_build_object('questionKey', question, 'plantingId', planting_id, 'kind', 'given',
				'value', bearing_trees * 10, 'given', null)) as answers
		from directory.planting t, unnest('{bearing_trees,normal_crop,harvested}'::text[]) question
		where t.operation_id = r.operation_id) p
	where r.survey_id = $1 and r.submitted_at is not null`;

const facts = `insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
		stratum_key, y, x, is_day)
	select f.survey_id, m, k, f.operation_id, f.owner_id, f.county_fips, f.state_fips, f.stratum_key,
		case when m like '%_harvest' then 200 + floor(60 * random()) else 1000 * random() end, 1000 + 4000 * random(),
		m like '%_harvest'
	from unnest($2::text[]) m, unnest('{all,apple}'::text[]) k, collect.frame_operation f
	where f.survey_id = $1 and f.disposition = 'complete' order by m, k, f.operation_id`;

/** One odd answer in ten responses, a third of them seen to. */
const findings = `insert into collect.edit_finding (response_id, check_kind, check_key, question_key, planting_id, crop_key,
		about, about_key, effect, outcome, closed_by, closed_at)
	select response_id, (array['range', 'sum', 'logic', 'unit_slip'])[n % 4 + 1], 'check', 'harvested', planting_id, 'apple',
		jsonb_build_array(jsonb_build_object('questionKey', 'harvested', 'plantingId', planting_id, 'kind', 'given',
			'value', 9000000, 'given', null)), '', random(), case when n % 3 = 0 then 'confirmed' end,
		case when n % 3 = 0 then $2::uuid end, case when n % 3 = 0 then now() end
	from (select r.response_id, p.planting_id, row_number() over () as n from collect.response r
			join directory.planting p on p.operation_id = r.operation_id and p.crop_key = 'apple'
		where r.survey_id = $1 and r.submitted_at is not null and random() < 0.1) odd`;

const contacts = `insert into collect.contact (operation_id, survey_id, person_id, way, outcome, made_at, next_on)
	select operation_id, $1::uuid, $2::uuid, 'telephone', outcome, now() - random() * interval '20 days',
		case when outcome = 'call_back' then current_date + (20 * random())::int - 3 end
	from (select operation_id, (array['no_answer', 'message_left', 'call_back', 'reached'])[(4 * random())::int % 4 + 1] as outcome
		from collect.frame_operation where survey_id = $1 and random() < 0.3) called`;

const mailings = `insert into collect.mailing (survey_id, operation_id, kind, wave, queued_by, queued_at, sent_at)
	select f.survey_id, operation_id, kind, 1, $2::uuid, now() - interval '9 days', now() - interval '9 days'
	from collect.frame_operation f join directory.operation o using (operation_id), unnest('{invitation,reminder}'::text[]) kind
	where f.survey_id = $1 and o.email is not null and (kind = 'invitation' or f.disposition <> 'complete')`;

const events = `insert into log.event (happened_at, person_id, action, subject_kind, subject_id, state_fips, detail)
	select now() - i * interval '10 seconds', case when i % 3 = 0 then $1::uuid end, 'response.submitted', 'response',
		gen_random_uuid()::text, '19', '{"version": 1}' from generate_series(1, $2::int) i`;
