import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { findOwnFacts } from "#app/collect/own-facts.server.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { comparisonKey, findComparison } from "#app/publish/comparison.server.ts";
import { listDataRows } from "#app/publish/data-file.server.ts";
import { cellsCsv } from "#app/publish/data-file.ts";
import { findMapFigures } from "#app/publish/figures.server.ts";
import { createDraft, listDraftCells } from "#app/release/drafts.server.ts";
import { approveDraft } from "#app/release/approval.server.ts";
import { type Published, publishRelease } from "#app/release/publish.server.ts";
import { findFigureOrigin } from "#app/routes/desk/parts/estimates/figure-origin.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { asGrower, growerOf } from "./answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, draftOf, loadPlaces, useDatabase } from "./surveys-fixture.ts";

// First bloom of apples in a leap year, days counted by hand: 115 is April 24. Twenty growers of one size are asked and
// sixteen tell a day, so that each of these stands for as many operations as any other.
const told = {
	"19001": [115, 116, 117, 118, 119, 119, 120, 121, 125],
	"19003": [110, 111, 112, 113, 114, 115, 116],
};
const silent = { "19001": 3, "19003": 1 };
const bloom = { measureKey: "first_bloom", cropKey: "apple" };

let database: TestDatabase;
let owner: Client;
let associate: Associate;
let coordinator: Coordinator;
let surveyId: string;
let release: Published;
let growers: string[];

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
	for (const fips of Object.keys(told))
		await owner.query(
			`insert into directory.county (county_fips, state_fips, name) values ($1, '19', $2) on conflict do nothing`,
			[fips, `County ${fips}`],
		);
	await answeredSurvey();
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function answeredSurvey(): Promise<void> {
	const days = new Map<string, number | null>();
	for (const fips of ["19001", "19003"] as const) {
		for (const day of [...told[fips], ...Array<null>(silent[fips]).fill(null)]) {
			const operationId = await addOperation(owner, { state: "19", name: `Orchard ${days.size}`, email: null });
			await owner.query("update directory.operation set county_fips = $1 where operation_id = $2", [fips, operationId]);
			days.set(operationId, day);
		}
	}
	growers = [...days.keys()];
	const asked = draftOf(["19"], { formKey: "bloom_watch", season: 2024 });
	const made = await asDesk(associate, (trx) => createSurvey(trx, associate, asked));
	surveyId = (made as { surveyId: string }).surveyId;
	await asDesk(associate, (trx) => openSurvey(trx, associate, surveyId));
	for (const [operationId, day] of days) if (day !== null) await tell(operationId, day);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
}

async function tell(operationId: string, day: number): Promise<void> {
	for (const [measure, y, isDay] of [
		["first_bloom", day, true],
		["base.bearing_trees", 40, false],
		["base.light_bloom_trees", 20, false],
	] as const) {
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
				stratum_key, y, x, is_day)
			select survey_id, $3, c.crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, $4, 1, $5
			from collect.frame_operation, unnest(case when $5 then array['apple'] else array['apple', 'all'] end) as c(crop_key)
			where survey_id = $1 and operation_id = $2`,
			[surveyId, operationId, measure, y, isDay],
		);
	}
}

const county = { value: 119, quartiles: { first: 117, third: 120 } };
const network = { value: 116, quartiles: { first: 113, third: 119 } };

test("a draft holds each area's median and quartiles, as counted by hand", async () => {
	const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft(made);
	const cells = await asDesk(associate, (trx) => listDraftCells(trx, made.releaseDraftId));
	const figure = (area: string, crop = "apple") =>
		cells
			.find(({ areaKey, cropKey }) => areaKey === area && cropKey === crop)
			?.figures?.find(({ measureKey }) => measureKey === "first_bloom");
	expect(figure("19001")).toMatchObject({ ...county, cv: null, steadiness: "steady" });
	expect(figure("19003")).toMatchObject({ value: 113, quartiles: { first: 111, third: 115 } });
	expect(figure("network")).toMatchObject(network);
	expect(figure("network", "all")).toBeUndefined();

	const published = await scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		await approveDraft(trx, coordinator, made.releaseDraftId, new Date());
		return publishRelease(trx, made.releaseDraftId, "test");
	});
	expect(published.outcome).toBe("published");
	release = published as Published;
});

test("the reader gets days with the season whose dates they are, and classes between days", async () => {
	const figures = await findMapFigures(release.number, "first_bloom", "apple", "county");
	expect(figures?.measure).toMatchObject({ kind: "day", unit: "day", season: 2024, hue: "bloom" });
	const cell = figures?.cells.find(({ areaKey }) => areaKey === "19001");
	expect(cell).toMatchObject({ ...county, look: "number", steadiness: "steady" });
	expect(cell!.lower).toBeLessThanOrEqual(119);
	expect(cell!.upper).toBeGreaterThanOrEqual(119);
	expect(figures?.classes.map(({ from, to }) => [from, to])).toEqual([
		[113, 113],
		[119, 119],
	]);
});

test("the data file tells each day as a number and as its date in the leap year", async () => {
	const csv = cellsCsv({ number: release.number, season: 2024 }, await listDataRows(release.releaseId));
	const [header, ...lines] = csv.split("\r\n").map((line) => line.split(","));
	const rowOf = (...keys: string[]) => lines.find((line) => keys.every((key) => line.includes(key)))!;
	const row = rowOf("first_bloom", "apple", "19001");
	const field = (name: string) => row[header!.indexOf(name)];
	expect([field("value"), field("value_date")]).toEqual(["119", "2024-04-28"]);
	expect([field("first_quartile"), field("first_quartile_date")]).toEqual(["117", "2024-04-26"]);
	expect([field("third_quartile"), field("third_quartile_date")]).toEqual(["120", "2024-04-29"]);
	expect(rowOf("first_bloom", "all", "19001")[header!.indexOf("status")]).toBe("O");
});

test("a grower's own day stands beside the county's", async () => {
	const grower = growerOf(growers[0]!);
	const own = await asGrower(grower, (trx) => findOwnFacts(trx, grower, surveyId));
	expect(own).toMatchObject({ season: 2024, releaseId: release.releaseId });
	expect(own?.operations[0]?.figures).toEqual([{ ...bloom, yesOrNo: false, value: 115 }]);
	const beside = await findComparison(release.releaseId, "19001", [bloom]);
	expect(beside?.cells[comparisonKey(bloom)]).toMatchObject({ areaKey: "19001", ...county });
	expect(beside?.measures.find(({ key }) => key === "first_bloom")).toMatchObject({ unit: "day", season: 2024 });
});

test("the desk sees what a median is made of: the answers up to its day, stratum by stratum", async () => {
	const place = { surveyId, areaKey: "19001", ...bloom };
	const found = await asDesk(associate, (trx) => findFigureOrigin(trx, associate, place));
	expect(found?.measure).toMatchObject({ kind: "day", season: 2024 });
	expect(found?.origin.estimate).toMatchObject(county);
	expect(found?.origin.strata).toMatchObject([
		{ frameSize: 20, respondents: 16, weight: 1.25, inArea: 9, sumY: 6, varianceShare: 1 },
	]);
	expect(found?.origin.totals).toMatchObject({ count: 11.25, y: 7.5 });
	expect(found?.origin.items).toMatchObject({ used: 9, setAside: 0 });
});
