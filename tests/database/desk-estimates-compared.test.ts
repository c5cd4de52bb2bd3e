import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { listComparedEstimates } from "#app/routes/desk/parts/estimates/compared-estimates.server.ts";
import { ComparedQuery } from "#app/routes/desk/parts/estimates/estimates.schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addOperation,
	addPerson,
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
let wisconsin: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	await owner.query("update directory.county set district_key = null");
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** A closed survey of eight owners of one county, who all lost 20 to 27 pounds of a hundred. */
async function closedSurvey(): Promise<string> {
	for (let at = 0; at < 8; at++) await addOperation(owner, { state: "19", name: `Orchard ${at}` });
	const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId));
	await owner.query("update collect.frame_operation set disposition = 'complete' where survey_id = $1", [surveyId]);
	for (const [measure, y, x] of [
		["crop_loss", "20 + at", "100"],
		["base.bearing_trees", "40", "1"],
		["base.normal_crop_lb", "100", "1"],
		["base.harvested_lb", "80 - at", "1"],
	] as const) {
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, y, x)
			select survey_id, $2, 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, ${y}, ${x} from (
				select f.*, row_number() over (order by o.name) - 1 as at
				from collect.frame_operation f join directory.operation o using (operation_id) where f.survey_id = $1) s`,
			[surveyId, measure],
		);
	}
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
	return surveyId;
}

const compared = (viewer: Associate, surveyId: string, show: "changed" | "all") =>
	asDesk(viewer, (trx) => listComparedEstimates(trx, viewer, surveyId, ComparedQuery.parse({ crop: "apple", show })));

test("what a correction moves is told against the newest draft, and to nobody of another state", async () => {
	const surveyId = await closedSurvey();
	expect(await compared(iowa, surveyId, "all")).toMatchObject({ draftedAt: null, rows: [] });

	const made = await asDesk(iowa, (trx) => createDraft(trx, iowa, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	expect(await compared(iowa, surveyId, "changed")).toMatchObject({ rows: [], changed: 0 });
	const before = (await compared(iowa, surveyId, "all"))!;
	expect(before.draftedAt).toBeInstanceOf(Date);
	expect(before.rows.map((row) => [row.area.key, row.measureKey, row.difference])).toEqual([
		["19", "crop_loss", 0],
		["19103", "crop_loss", 0],
	]);

	// The one who lost 27 of a hundred had lost 67: forty more of eight hundred.
	await owner.query("update collect.fact set y = 67 where survey_id = $1 and measure_key = 'crop_loss' and y = 27", [
		surveyId,
	]);
	const after = (await compared(iowa, surveyId, "changed"))!;
	expect(after).toMatchObject({ changed: 2, total: 2 });
	expect(after.rows[1]).toMatchObject({ area: { key: "19103" }, drafted: { value: 23.5 }, respondentsNow: 8 });
	expect(after.rows[1]!.current!.value).toBeCloseTo(28.5, 9);
	expect(after.rows[1]!.difference).toBeCloseTo(5, 9);

	expect(await compared(wisconsin, surveyId, "all")).toBeUndefined();
	expect(await count(owner, "collect.release_draft where survey_id = $1", [surveyId])).toBe(1);
});
