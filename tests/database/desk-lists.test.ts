import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { CountQuery } from "#app/collect/desk-lists.schema.ts";
import { listCountyCounts } from "#app/collect/response-counts.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { listReleaseWork } from "#app/release/release-work.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addOperation,
	addPerson,
	answerFor,
	asDesk,
	connectOwner,
	count,
	draftOf,
	loadPlaces,
	type NewOperation,
	useDatabase,
} from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;
let both: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** Opens a survey of both states over operations of its own: those of other tests grow no such crop. */
async function surveyOf(operations: NewOperation[], countyOf: (i: number) => string | null = () => null) {
	const crop = `crop_${"abcdefghij"[made++]}`;
	await owner.query("insert into directory.crop values ($1, $2, 'tree', null)", [crop, 100 + made]);
	const ids: string[] = [];
	for (const [i, operation] of operations.entries()) {
		const operationId = await addOperation(owner, { ...operation, crop });
		const county = countyOf(i);
		if (county)
			await owner.query("update directory.operation set county_fips = $1 where operation_id = $2", [
				county,
				operationId,
			]);
		ids.push(operationId);
	}
	const draft = draftOf(["19", "55"], { crops: [crop] });
	const { surveyId } = (await asDesk(both, (trx) => createSurvey(trx, both, draft))) as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	return { surveyId, ids };
}
let made = 0;

const counts = (viewer: Associate, surveyId: string, query: Record<string, unknown> = {}) =>
	asDesk(viewer, (trx) => listCountyCounts(trx, viewer, surveyId, CountQuery.parse(query)));

describe("counts by county", () => {
	test("tell asked and answered of granted states only", async () => {
		const five = Array.from({ length: 5 }, (): NewOperation => ({ state: "19" }));
		const { surveyId, ids } = await surveyOf([...five, { state: "55" }], (i) => (i < 2 ? "19001" : null));
		await answerFor(owner, surveyId, ids[0]!);
		await answerFor(owner, surveyId, ids[2]!);
		// Begun and not sent in: no answer yet.
		await owner.query(
			`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
			values ($1, $2, '19', 'en', '1')`,
			[surveyId, ids[3]],
		);
		await answerFor(owner, surveyId, ids[5]!);

		const seen = await counts(iowa, surveyId);
		expect(seen.rows).toEqual([
			{ countyFips: "19001", countyName: "Adair", stateFips: "19", asked: 2, answered: 1, share: 50 },
			{ countyFips: "19103", countyName: "Johnson", stateFips: "19", asked: 3, answered: 1, share: 100 / 3 },
		]);
		expect((await counts(wisconsin, surveyId)).rows).toMatchObject([{ countyFips: "55025", asked: 1, answered: 1 }]);
		expect((await counts(both, surveyId)).total).toBe(3);
		const byShare = await counts(both, surveyId, { sort: "share", direction: "desc" });
		expect(byShare.rows.map((row) => row.countyFips)).toEqual(["55025", "19001", "19103"]);
	});

	test("come in pages of fifty without losing a county", async () => {
		const { rows: counties } = await owner.query<{ county_fips: string }>(
			"select county_fips from directory.county where state_fips = '19' order by 1 limit 52",
		);
		const { surveyId } = await surveyOf(
			counties.map(() => ({ state: "19" })),
			(i) => counties[i]!.county_fips,
		);
		const pages = [
			await counts(iowa, surveyId, { sort: "asked" }),
			await counts(iowa, surveyId, { sort: "asked", page: 2 }),
		];
		expect(pages.map((page) => page.rows.length)).toEqual([50, 2]);
		expect(new Set(pages.flatMap((page) => page.rows.map((row) => row.countyFips))).size).toBe(52);
		expect((await counts(iowa, surveyId, { page: 9 })).page).toBe(2);
	});
});

test("a closed survey waits for its release until one is approved, and only in its own states", async () => {
	const { surveyId } = await surveyOf([{ state: "19" }]);
	const work = async (viewer: Associate) =>
		(await asDesk(viewer, (trx) => listReleaseWork(trx, viewer))).find((row) => row.surveyId === surveyId)?.work;
	const draft = (status: string, audit: string | null = null) =>
		owner.query(
			`insert into collect.release_draft (survey_id, status, rules, audit, drafted_by, drafted_at)
			values ($1, $2, '{}', $3, $4, clock_timestamp())`,
			[surveyId, status, audit, both.personId],
		);
	expect(await work(iowa)).toBeUndefined();
	await owner.query("update collect.survey set closed_at = now() where survey_id = $1", [surveyId]);
	expect(await work(iowa)).toBe("none");
	await draft("superseded");
	await draft("audited");
	expect([await work(iowa), await work(wisconsin)]).toEqual(["audited", "audited"]);
	await owner.query("delete from collect.survey_state where survey_id = $1 and state_fips = '55'", [surveyId]);
	expect(await work(wisconsin)).toBeUndefined();
	expect(await count(owner, "collect.release_draft where survey_id = $1", [surveyId])).toBe(2);
	await draft("approved", '{"passed": true}');
	expect(await work(iowa)).toBeUndefined();
});
