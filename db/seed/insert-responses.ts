import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { FormDefinition } from "#app/collect/form.ts";
import { readyForms } from "#app/collect/forms/ready-forms.ts";
import { factRows } from "#app/tally/facts.server.ts";
import type { Asked, Reply, SeedResponse } from "./replies.ts";
import type { Season } from "./seasons.ts";

type Response = SeedResponse & { operation_id: string };

/** Responses with what each holds now and what was sent in, a few statements for all of them. */
export async function insertResponses(trx: Trx, survey: Season, asked: Asked[], replies: Reply[]): Promise<void> {
	const { surveyId, season } = survey;
	const responses = replies.flatMap(({ operation_id, response }): Response[] =>
		response ? [{ ...response, operation_id }] : [],
	);
	const rows = responses.map(({ submissions, ...response }) => ({
		...response,
		answers: undefined,
		submitted_version: submissions.length,
		first_submitted_at: submissions[0]?.submitted_at ?? null,
		submitted_at: submissions.at(-1)?.submitted_at ?? null,
	}));
	await sql`insert into collect.response (response_id, survey_id, operation_id, state_fips, language, mode, pledge_version,
			pledged_at, draft_version, submitted_version, receipt_code, started_at, first_submitted_at, submitted_at)
		select r.response_id, ${surveyId}, r.operation_id, f.state_fips, r.language, r.mode, ${`${season}-1`},
			r.started_at, r.draft_version, r.submitted_version, r.receipt_code, r.started_at, r.first_submitted_at, r.submitted_at
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb) as r(response_id uuid, operation_id uuid, language text,
			mode text, draft_version int, submitted_version int, receipt_code text, started_at timestamptz,
			first_submitted_at timestamptz, submitted_at timestamptz)
		join collect.frame_operation f on f.survey_id = ${surveyId} and f.operation_id = r.operation_id`.execute(trx);
	await insertAnswers(trx, responses);
	await insertSubmissions(trx, asked, responses);
}

async function insertAnswers(trx: Trx, responses: Response[]): Promise<void> {
	const rows = responses.flatMap(({ response_id, answers, submissions, started_at }) =>
		answers.map((answer) => ({ ...answer, response_id, answered_at: submissions.at(-1)?.submitted_at ?? started_at })),
	);
	await sql`insert into collect.answer (response_id, question_key, planting_id, kind, value, given, answered_at)
		select response_id, "questionKey", "plantingId", kind, nullif(value, 'null'::jsonb), nullif(given, 'null'::jsonb), answered_at
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb) as a(response_id uuid, "questionKey" text, "plantingId" uuid,
			kind text, value jsonb, given jsonb, answered_at timestamptz)`.execute(trx);
}

/** What was sent in, with the plantings that were asked about. */
async function insertSubmissions(trx: Trx, asked: Asked[], responses: Response[]): Promise<void> {
	const plantingsOf = plantingsByOperation(asked);
	const rows = responses.flatMap(({ response_id, operation_id, submissions }) =>
		submissions.map(({ version, submitted_at, answers }) => ({
			response_id,
			version,
			submitted_at,
			answers: { plantings: plantingsOf.get(operation_id) ?? [], answers },
		})),
	);
	await sql`insert into collect.submission (response_id, version, submitted_at, answers)
		select response_id, version, submitted_at, answers
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
			as s(response_id uuid, version int, submitted_at timestamptz, answers jsonb)`.execute(trx);
}

/** The facts of each response's newest submission, with place, owner and stratum of the frozen frame. */
export async function insertFacts(
	trx: Trx,
	{ surveyId, form }: Season,
	asked: Asked[],
	replies: Reply[],
): Promise<void> {
	const definition = FormDefinition.parse(readyForms[form]);
	const plantingsOf = plantingsByOperation(asked);
	const rows = replies.flatMap(({ operation_id, response }) => {
		const sent = response?.submissions.at(-1);
		if (!sent) return [];
		const facts = factRows(definition, { plantings: plantingsOf.get(operation_id) ?? [], answers: sent.answers });
		return facts.map((fact) => ({ ...fact, operation_id }));
	});
	await sql`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
			stratum_key, y, x, is_day)
		select f.survey_id, r.measure_key, r.crop_key, f.operation_id, f.owner_id, f.county_fips, f.state_fips, f.stratum_key,
			r.y, r.x, r.is_day
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
			as r(operation_id uuid, measure_key text, crop_key text, y float8, x float8, is_day boolean)
		join collect.frame_operation f on f.survey_id = ${surveyId} and f.operation_id = r.operation_id`.execute(trx);
}

function plantingsByOperation(asked: Asked[]) {
	return new Map(
		asked.map(({ operation_id, plantings }) => [
			operation_id,
			plantings.map(({ planting_id, crop_key, bearing_trees }) => ({
				plantingId: planting_id,
				cropKey: crop_key,
				bearingTrees: bearing_trees,
			})),
		]),
	);
}
