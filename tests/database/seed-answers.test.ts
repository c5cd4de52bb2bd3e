import { expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { listAnswers, listPlantingsAsked, type Submission } from "#app/collect/answer-rows.server.ts";
import { FormDefinition } from "#app/collect/form.ts";
import { listOpenChecks } from "#app/collect/checks.ts";
import { readStep } from "#app/collect/step-fields.ts";
import { valuesOf } from "#app/collect/step-values.ts";
import { answersByPlace, keptAnswers, listAsked } from "#app/collect/steps.ts";
import type { MassUnit } from "#app/collect/units.ts";
import { factRows } from "#app/tally/facts.server.ts";
import { surveyOf, useDemo } from "./seed-fixture.ts";

const { rowsOf, numberOf } = useDemo();

test("whoever answered has a response with facts, and nobody else has; every survey has several endings", async () => {
	const [uneven] = await rowsOf<Record<string, number>>(`select
		count(*) filter (where (f.disposition = 'complete') <> (r.submitted_at is not null)) as unlike_response,
		count(*) filter (where (f.disposition = 'complete') <> exists (select from collect.fact x
			where x.survey_id = f.survey_id and x.operation_id = f.operation_id)) as unlike_facts,
		count(*) filter (where (f.disposition = 'partial') <> (r.response_id is not null and r.submitted_at is null)) as unlike_partial
		from collect.frame_operation f left join collect.response r using (survey_id, operation_id)`);
	expect(uneven).toEqual({ unlike_response: 0, unlike_facts: 0, unlike_partial: 0 });
	for (const [season, least, most] of [
		[2024, 0.55, 0.7],
		[2025, 0.55, 0.7],
		[2026, 0.3, 0.5],
	] as const) {
		const [counts] = await rowsOf<{ share: number; kinds: number }>(
			`select avg((disposition = 'complete')::int)::float8 as share, count(distinct disposition)::int as kinds
			from collect.frame_operation where survey_id = $1`,
			[surveyOf(season)],
		);
		expect(counts!.share).toBeGreaterThan(least);
		expect(counts!.share).toBeLessThan(most);
		expect(counts!.kinds).toBeGreaterThanOrEqual(5);
	}
});

test("answers lie between opening and closing, harvest days before the day they are told, receipts are unlike", async () => {
	expect(
		await rowsOf(`select r.response_id from collect.response r join collect.survey s using (survey_id)
			where not (r.started_at > s.opened_at and r.started_at <= coalesce(r.first_submitted_at, r.started_at)
				and coalesce(r.submitted_at, r.started_at) < least(s.closes_at, now())
				and r.first_submitted_at is not distinct from (select min(v.submitted_at) from collect.submission v where v.response_id = r.response_id)
				and r.submitted_at is not distinct from (select max(v.submitted_at) from collect.submission v where v.response_id = r.response_id)
				and r.submitted_version = (select count(*) from collect.submission v where v.response_id = r.response_id))`),
	).toEqual([]);
	expect(
		await numberOf(`select count(*) from collect.answer a join collect.response r using (response_id)
			where question_key in ('first_harvest', 'last_harvest') and (value #>> '{}')::date > coalesce(r.submitted_at, r.started_at)`),
	).toBe(0);
	const codes = await rowsOf<{ receipt_code: string }>(
		"select receipt_code from collect.response where submitted_at is not null",
	);
	expect(codes.filter(({ receipt_code }) => !/^[3-9A-Y]{4}-[3-9A-Y]{4}$/.test(receipt_code))).toEqual([]);
	expect(new Set(codes.map(({ receipt_code }) => receipt_code)).size).toBe(codes.length);
});

test("causes that were told add up to a hundred, and frost leads them in Iowa in 2025 only", async () => {
	const causes = `select sum((value #>> '{}')::float8) as total from collect.answer
		where question_key like 'cause\\_%' and kind = 'given' group by response_id`;
	expect(await numberOf(`select count(*) from (${causes}) c`)).toBeGreaterThan(1_500);
	expect(await numberOf(`select count(*) from (${causes}) c where abs(total - 100) > 1e-9`)).toBe(0);
	const frost = (season: number) =>
		numberOf(
			`select avg((value #>> '{}')::float8) from collect.answer join collect.response using (response_id)
			where survey_id = $1 and state_fips = '19' and question_key = 'cause_freeze' and kind = 'given'`,
			[surveyOf(season)],
		);
	expect(await frost(2025)).toBeGreaterThan(60);
	expect(await frost(2024)).toBeLessThan(10);
});

type Sample = {
	response_id: string;
	survey_id: string;
	operation_id: string;
	season: number;
	day: string;
	language: "en" | "es";
	unit: MassUnit;
	definition: FormDefinition;
	sent: Submission;
};

/** Responses of all seasons, each with its newest submission; the same ones each time. */
async function sampleOf(size: number): Promise<Sample[]> {
	const sample = await rowsOf<Sample>(
		`select r.response_id, r.survey_id, r.operation_id, s.season, r.submitted_at::date::text as day, r.language,
			o.mass_unit as unit, v.definition, b.answers as sent
		from collect.response r join collect.survey s using (survey_id) join collect.form_version v using (form_version_id)
			join directory.operation o using (operation_id)
			join collect.submission b on b.response_id = r.response_id and b.version = r.submitted_version
		order by md5(r.response_id::text) limit ${size}`,
	);
	expect(sample).toHaveLength(size);
	return sample.map((row) => ({ ...row, definition: FormDefinition.parse(row.definition) }));
}

test("facts are those of the newest submission", async () => {
	for (const { survey_id, operation_id, definition, sent } of await sampleOf(200)) {
		const stored = await rowsOf<object>(
			`select measure_key, crop_key, y, x, is_day from collect.fact where survey_id = $1 and operation_id = $2`,
			[survey_id, operation_id],
		);
		// Also of what was asked and not told: a row without figures.
		const wanted = factRows(definition, sent);
		expect(stored).toHaveLength(wanted.length);
		expect(stored).toEqual(expect.arrayContaining(wanted));
	}
});

test("the form's own pages would have stored the same answers", async () => {
	for (const { response_id, survey_id, operation_id, ...row } of await sampleOf(150)) {
		const place = { surveyId: survey_id, operationId: operation_id };
		const { answers, plantings } = await scopedTransaction({ kind: "network" }, async (trx) => {
			const held = await listAnswers(trx, response_id);
			return { answers: held, plantings: await listPlantingsAsked(trx, place, held) };
		});
		expect(listOpenChecks({ definition: row.definition, plantings, answers })).toEqual([]);
		const settings = { massUnit: row.unit, language: row.language, season: row.season, today: row.day };
		const reread = listAsked(row.definition, plantings, answers).flatMap(({ step, questions }) => {
			const read = readStep(step, questions, valuesOf(step, questions, answers, settings), settings);
			if (!read.ok) throw new Error(`${step.key}: ${JSON.stringify(read.problems)}`);
			return read.answers;
		});
		for (const same of [row.sent.answers, keptAnswers(row.definition, plantings, answers), reread]) {
			expect(answersByPlace(same)).toEqual(answersByPlace(answers));
		}
	}
});
