import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { AnsweredQuery } from "#app/collect/answered.schema.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { readResponseRates } from "#app/routes/desk/parts/answered/response-rates.server.ts";
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
	useDatabase,
} from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let both: Associate;
const frame: Record<string, string> = {};

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	await owner.query("insert into directory.district values ('IA-R', '19', 'Rates of Iowa')");
	await owner.query("update directory.county set district_key = 'IA-R' where county_fips = '19103'");
	await owner.query("update directory.county set district_key = null where county_fips = '55025'");
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
	for (const [name, state, trees] of [
		["answered", "19", 40],
		["large", "19", 1200],
		["refused", "19", 60],
		["gone", "19", 30],
		["begun", "19", 50],
		["silent", "19", 90],
		["neighbor", "55", 70],
	] as const) {
		frame[name] = await addOperation(owner, { state, trees, name });
	}
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function survey(season = 2031) {
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"], { season })));
	const { surveyId } = made as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	return surveyId;
}

async function dispose(surveyId: string, name: string, disposition: string) {
	await owner.query("update collect.frame_operation set disposition = $3 where survey_id = $1 and operation_id = $2", [
		surveyId,
		frame[name],
		disposition,
	]);
}

async function answeredAfter(surveyId: string, name: string, days: number) {
	await answerFor(owner, surveyId, frame[name]!);
	await owner.query(
		`update collect.response r set first_submitted_at = s.opened_at + make_interval(days => $3)
		from collect.survey s where s.survey_id = r.survey_id and r.survey_id = $1 and r.operation_id = $2`,
		[surveyId, frame[name], days],
	);
}

const ratesOf = async (viewer: Associate, surveyId: string, query: Record<string, string> = {}) => {
	const found = await asDesk(viewer, (trx) => readResponseRates(trx, viewer, surveyId, AnsweredQuery.parse(query)));
	if (!found) throw new Error("the survey was not found");
	return found;
};

test("every operation has one disposition, and the rates follow from them, counted and by trees", async () => {
	const surveyId = await survey();
	await answeredAfter(surveyId, "answered", 0);
	await answeredAfter(surveyId, "large", 2);
	await dispose(surveyId, "refused", "refused");
	await dispose(surveyId, "gone", "not_eligible");
	await dispose(surveyId, "begun", "partial");

	const { whole, dispositions, parts } = await ratesOf(iowa, surveyId);
	expect(dispositions.reduce((sum, { operations }) => sum + operations, 0)).toBe(6);
	expect(whole.asked).toEqual({ operations: 6, trees: 1470 });
	expect(whole.answered).toEqual({ operations: 2, trees: 1240 });
	// 2 complete, 2 broke off or refused, 1 unknown, 1 not eligible.
	expect(whole.response.counted.rr1).toBeCloseTo(2 / 5, 12);
	expect(whole.response.counted.rr3).toBeCloseTo(2 / (4 + 0.8), 12);
	expect(whole.response.counted.rr5).toBeCloseTo(2 / 4, 12);
	expect(whole.response.weighted.rr1).toBeCloseTo(1240 / 1440, 12);
	expect(parts.map(({ key }) => key)).toEqual(["19"]);
});

test("parts are states, districts or strata, and add up to the whole", async () => {
	const surveyId = await survey();
	await answeredAfter(surveyId, "large", 1);
	await answeredAfter(surveyId, "neighbor", 1);
	const keys = { state: ["19", "55"], district: ["19 IA-R", "55 "], stratum: ["19 small", "19 large", "55 small"] };
	for (const by of ["state", "district", "stratum"] as const) {
		const { parts, whole } = await ratesOf(both, surveyId, { by });
		expect(parts.map(({ key }) => key)).toEqual(keys[by]);
		expect(parts.reduce((sum, { asked }) => sum + asked.operations, 0)).toBe(whole.asked.operations);
		expect(parts.reduce((sum, { answered }) => sum + answered.trees, 0)).toBe(1270);
	}
});

test("the curve ends at RR1 and stands beside the same form's earlier season", async () => {
	const before = await survey(2040);
	await owner.query("update collect.survey set opened_at = now() - interval '9 days' where survey_id = $1", [before]);
	await answeredAfter(before, "answered", 4);
	const surveyId = await survey(2041);
	await owner.query("update collect.survey set opened_at = now() - interval '3 days' where survey_id = $1", [surveyId]);
	await answeredAfter(surveyId, "answered", 1);
	await answeredAfter(surveyId, "large", 3);

	const { curve, whole, earlier, parts } = await ratesOf(iowa, surveyId);
	expect(earlier).toMatchObject({ season: 2040 });
	expect(parts[0]!.before!.answered.operations).toBe(1);
	expect(curve!.now.points.map(({ share }) => share)).toEqual([0, 1 / 6, 1 / 6, 2 / 6]);
	expect(curve!.now.points.at(-1)!.share).toBe(whole.response.counted.rr1);
	expect(curve!.before!.points).toHaveLength(10);
	expect(curve!.before!.points.at(-1)!.share).toBe(1 / 6);

	const byTrees = await ratesOf(iowa, surveyId, { weigh: "trees" });
	expect(byTrees.curve!.now.points.at(-1)!.share).toBe(byTrees.whole.response.weighted.rr1);
});

test("another state's growers are in no count, and a survey of other states is not found", async () => {
	const surveyId = await survey();
	await answeredAfter(surveyId, "neighbor", 0);
	expect(
		await count(owner, "collect.response where survey_id = $1 and operation_id = $2", [surveyId, frame.neighbor]),
	).toBe(1);
	const { whole, curve, parts } = await ratesOf(iowa, surveyId);
	expect(whole.asked.operations).toBe(6);
	expect(whole.answered.operations).toBe(0);
	expect(curve!.now.points.at(-1)!.share).toBe(0);
	expect(parts.map(({ key }) => key)).toEqual(["19"]);

	const nobody: Associate = { ...iowa, stateFips: ["27"] };
	const found = await asDesk(nobody, (trx) => readResponseRates(trx, nobody, surveyId, AnsweredQuery.parse({})));
	expect(found).toBeUndefined();
});
