import { sql } from "kysely";
import { expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { listAnsweredDays } from "#app/collect/answered-days.server.ts";
import { listCountyCounts } from "#app/collect/response-counts.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { addOperation, answerFor, asDesk, connectOwner, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

// Who has answered, where and when, is kept by triggers: here all that can happen to an answer, by one hand and by many.

const { owner, ownerUrl, iowa, wisconsin, both } = await openSurveysDatabase();

/** A survey of apples and plums: two operations of Wisconsin, then others of Iowa, every second with plums. */
async function opened(trees: number[]) {
	await owner.query("update directory.operation set status = 'left'");
	const ids: string[] = [];
	for (const [i, count] of trees.entries()) {
		ids.push(await addOperation(owner, { state: i < 2 ? "55" : "19", trees: count }));
		if (i % 2 === 0)
			await owner.query(
				"insert into directory.planting (operation_id, crop_key, bearing_trees) values ($1, 'plum', 7)",
				[ids.at(-1)],
			);
	}
	const draft = draftOf(["19", "55"], { crops: ["apple", "plum"] });
	const { surveyId } = await asDesk(both, (trx) => createSurvey(trx, both, draft));
	expect(await asDesk(both, (trx) => openSurvey(trx, both, surveyId!))).toBe("opened");
	return { surveyId: surveyId!, ids };
}

/** What the pages tell, counted from the responses themselves. */
async function counted(surveyId: string, crop: string, states: string[]) {
	const { rows: days } = await owner.query(
		`select floor(extract(epoch from r.first_submitted_at - s.opened_at) / 86400)::int as day,
			count(distinct r.operation_id)::int as operations, sum(c.bearing_trees)::float8 as "bearingTrees"
		from collect.response r join collect.frame_crop c using (survey_id, operation_id) join collect.survey s using (survey_id)
		where survey_id = $1 and r.state_fips = any ($3) and r.submitted_at is not null and $2 in ('all', c.crop_key)
		group by 1 order by 1`,
		[surveyId, crop, states],
	);
	const { rows: counties } = await owner.query(
		`select f.county_fips as "countyFips", count(*)::int as asked, count(r.response_id)::int as answered,
			(100.0 * count(r.response_id) / count(*))::float8 as share
		from collect.frame_operation f left join collect.response r on r.survey_id = f.survey_id
			and r.operation_id = f.operation_id and r.submitted_at is not null
		where f.survey_id = $1 and f.state_fips = any ($2) group by 1 order by 1`,
		[surveyId, states],
	);
	return { days, counties };
}

async function told(viewer: Associate, surveyId: string, crop: string) {
	return asDesk(viewer, async (trx) => {
		const order = { sort: "county", direction: "asc", page: 1 } as const;
		const { rows } = await listCountyCounts(trx, viewer, surveyId, order);
		return {
			days: await listAnsweredDays(trx, viewer, surveyId, crop),
			counties: rows
				.map(({ countyFips, asked, answered, share }) => ({ countyFips, asked, answered, share }))
				.toSorted((a, b) => a.countyFips.localeCompare(b.countyFips)),
		};
	});
}

async function expectAsCounted(surveyId: string) {
	for (const viewer of [iowa, wisconsin, both])
		for (const crop of ["all", "apple", "plum"])
			expect(await told(viewer, surveyId, crop)).toEqual(await counted(surveyId, crop, viewer.stateFips));
	const kept = () =>
		owner.query(
			"select * from collect.answered_count where survey_id = $1 and operations <> 0 order by 2, 3, 4, 5, 6",
			[surveyId],
		);
	const before = (await kept()).rows;
	await owner.query("select collect.recount_answers($1)", [surveyId]);
	expect(before).toEqual((await kept()).rows);
	return before.length;
}

test("follow whatever happens to answers, for each state's desk", async () => {
	const { surveyId, ids } = await opened([40, 300, 5000, 60, 70]);
	expect(await expectAsCounted(surveyId)).toBe(0);
	for (const id of ids.slice(0, 4)) await answerFor(owner, surveyId, id);
	expect(await expectAsCounted(surveyId)).toBeGreaterThan(4);
	const ofOne = "where survey_id = $1 and operation_id = $2";
	for (const change of [
		`update collect.response set first_submitted_at = first_submitted_at + interval '3 days' ${ofOne}`,
		`update collect.response set submitted_at = submitted_at + interval '5 days', submitted_version = 2 ${ofOne}`,
		`update collect.response set withdrawn_at = now(), receipt_code = null, first_submitted_at = null, submitted_at = null ${ofOne}`,
		`update collect.response set late_at = now(), withdrawn_at = null, receipt_code = 'late' ${ofOne}`,
		`update collect.response set first_submitted_at = now(), submitted_at = now(), late_at = null ${ofOne}`,
	]) {
		await owner.query(change, [surveyId, ids[2]]);
		await expectAsCounted(surveyId);
	}
	await owner.query("delete from collect.submission where response_id in (select response_id from collect.response)");
	await owner.query(`delete from collect.response ${ofOne}`, [surveyId, ids[3]]);
	await expectAsCounted(surveyId);
	await owner.query("update collect.survey set opened_at = opened_at - interval '30 hours' where survey_id = $1", [
		surveyId,
	]);
	await expectAsCounted(surveyId);
	await owner.query("delete from collect.response where survey_id = $1", [surveyId]);
	expect(await expectAsCounted(surveyId)).toBe(0);
});

test("count all of many who send in at once", async () => {
	const { surveyId, ids } = await opened(Array.from({ length: 12 }, (_, i) => 20 + i * 90));
	await Promise.all(
		ids.map(async (id) => {
			await using one = await connectOwner(ownerUrl);
			await answerFor(one, surveyId, id);
		}),
	);
	expect(await expectAsCounted(surveyId)).toBeGreaterThan(4);
});

test("are a desk's of its states alone, and no grower's", async () => {
	const { surveyId, ids } = await opened([50, 60, 70]);
	for (const id of ids) await answerFor(owner, surveyId, id);
	const widened = { ...iowa, stateFips: ["19", "55"] };
	expect(await asDesk(iowa, (trx) => listAnsweredDays(trx, widened, surveyId, "all"))).toEqual([
		{ day: 0, operations: 1, bearingTrees: 77 },
	]);
	const seen = await scopedTransaction({ kind: "grower", operationIds: ids }, (trx) =>
		sql`select from collect.answered_count`.execute(trx),
	);
	expect(seen.rows).toEqual([]);
	await expectAsCounted(surveyId);
});
