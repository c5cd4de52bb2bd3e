import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { listDraftEstimates } from "#app/routes/desk/parts/estimates/draft-estimates.server.ts";
import { EstimatesQuery } from "#app/routes/desk/parts/estimates/estimates.schema.ts";
import { findFigureOrigin } from "#app/routes/desk/parts/estimates/figure-origin.server.ts";
import { figureOriginCsv } from "#app/routes/desk/parts/estimates/figure-origin-csv.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { iowaTold, surveyOf, wisconsinTold } from "./estimates-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

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
	await owner.query(`insert into directory.county (county_fips, state_fips, name) values ('19113', '19', 'Linn')
		on conflict do nothing`);
	await owner.query(`insert into directory.district (district_key, state_fips, name)
		values ('test-east', '19', 'East') on conflict do nothing`);
	await owner.query(
		`update directory.county set district_key = case when county_fips in ('19103', '19113') then 'test-east' end`,
	);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});
// Each test's frame is of its own operations.
beforeEach(async () => {
	await owner.query("update directory.operation set status = 'left' where status = 'active'");
});

const list = (viewer: Associate, surveyId: string, query: Record<string, string> = {}) =>
	asDesk(viewer, (trx) => listDraftEstimates(trx, viewer, surveyId, EstimatesQuery.parse({ crop: "apple", ...query })));
const origin = (viewer: Associate, surveyId: string, areaKey: string, measureKey = "crop_loss", cropKey = "apple") =>
	asDesk(viewer, (trx) => findFigureOrigin(trx, viewer, { surveyId, areaKey, cropKey, measureKey }));
type Listed = NonNullable<Awaited<ReturnType<typeof list>>>;
const keysOf = (listed: Listed | undefined) => listed?.rows.map((row) => row.area.key);
const lossOf = (listed: Listed | undefined, areaKey: string) =>
	listed?.rows.find((row) => row.area.key === areaKey)?.figures.find((figure) => figure.measureKey === "crop_loss");

describe("the estimates of a survey", () => {
	test("are those that one gets by hand, for state, district and county", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		const listed = await list(iowa, surveyId);
		expect(keysOf(listed)).toEqual(["19", "test-east", "19103", "19113"]);
		// The lone large answer joins the small ones: N = 9, n = 4, weight 2.25. R = 560/1400; residuals -30, -10, -60, 100.
		const standardError = 100 * Math.sqrt((1 - 4 / 9) * (4 / 3) * (14_600 / 1400 ** 2));
		const state = lossOf(listed, "19")!;
		expect(state).toMatchObject({ respondents: 4, missing: null, steadiness: "care" });
		expect(state.value).toBeCloseTo(40, 9);
		expect(state.standardError).toBeCloseTo(standardError, 9);
		expect(state.lower).toBeCloseTo(40 - 1.959963984540054 * standardError, 9);
		expect(lossOf(listed, "test-east")).toMatchObject({ value: state.value, standardError: state.standardError });
		expect(lossOf(listed, "19103")!.value).toBeCloseTo(15, 9);
	});

	test("never make one answer look precise", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		expect(lossOf(await list(iowa, surveyId), "19113")).toMatchObject({
			value: 50,
			respondents: 1,
			standardError: null,
			cv: null,
			lower: null,
			upper: null,
			steadiness: "rough",
			missing: "one_respondent",
		});
	});

	test("hold the viewer's states and no other, and these together where there are several", async () => {
		const surveyId = await surveyOf(owner, both, ["19", "55"], [...iowaTold, ...wisconsinTold]);
		const mine = await list(iowa, surveyId);
		expect(keysOf(mine)).toEqual(["19", "test-east", "19103", "19113"]);
		expect(mine).toMatchObject({ states: ["19"], statesNotHeld: ["55"] });
		expect(keysOf(await list(wisconsin, surveyId))).toEqual(["55", "55025"]);
		expect(keysOf(await list(both, surveyId))).toEqual(["network", "19", "test-east", "19103", "19113", "55", "55025"]);
		// Iowa's weight is 2.25; both of Wisconsin's answered.
		expect(lossOf(await list(both, surveyId), "network")!.value).toBeCloseTo(
			(100 * (2.25 * 560 + 50)) / (2.25 * 1400 + 200),
			9,
		);
		expect(lossOf(await list(both, surveyId), "55")).toMatchObject({
			value: 25,
			standardError: 0,
			steadiness: "steady",
		});
	});

	test("of a survey of other states are not found, though answers are there", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		expect(await list(wisconsin, surveyId)).toBeUndefined();
		expect(await origin(wisconsin, surveyId, "19")).toBeUndefined();
		expect(await list(iowa, "' or true")).toBeUndefined();
		expect(await count(owner, "collect.tally where survey_id = $1", [surveyId])).toBeGreaterThan(0);
	});

	test("are narrowed, sorted and paged as the address says, and what it asks wrongly falls back", async () => {
		const surveyId = await surveyOf(owner, both, ["19", "55"], [...iowaTold, ...wisconsinTold]);
		const one = { measure: "crop_loss" };
		expect(keysOf(await list(both, surveyId, { level: "county" }))).toEqual(["19103", "19113", "55025"]);
		expect(keysOf(await list(both, surveyId, { level: "county", state: "55" }))).toEqual(["55025"]);
		expect(keysOf(await list(both, surveyId, { ...one, level: "county", sort: "value", direction: "desc" }))).toEqual([
			"19113",
			"55025",
			"19103",
		]);
		expect(keysOf(await list(both, surveyId, { ...one, level: "county", sort: "cv" }))?.at(-1)).toBe("19113");
		expect(keysOf(await list(both, surveyId, { steadiness: "steady" }))).toEqual(["55", "55025"]);
		expect(await list(both, surveyId, { page: "9" })).toMatchObject({ page: 1, pageCount: 1, total: 7 });
		const odd = { crop: "melon", measure: "none", state: "99", sort: "secret", level: "moon", page: "-1" };
		expect((await list(both, surveyId, odd))?.query).toMatchObject({
			crop: "all",
			measure: "all",
			state: "all",
			sort: "area",
			level: "all",
			page: 1,
		});
	});

	test("are none before anybody answered", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], [{}, {}]);
		expect(await list(iowa, surveyId)).toMatchObject({ rows: [], total: 0, anyAnswer: false });
		expect((await origin(iowa, surveyId, "19"))?.origin).toMatchObject({
			estimate: null,
			strata: [],
			items: { used: 0, rate: null },
		});
	});
});

describe("how a figure was made", () => {
	test("tells weights, joined strata, answers set aside and response rates", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		const told = (await origin(iowa, surveyId, "19"))!;
		expect(told.origin.estimate).toEqual(lossOf(await list(iowa, surveyId), "19"));
		expect(told.origin.strata).toEqual([
			{
				stratumKeys: ["IA-small", "IA-large"],
				parts: [
					{ stateFips: "19", sizeClass: 1 },
					{ stateFips: "19", sizeClass: 3 },
				],
				frameSize: 9,
				respondents: 4,
				weight: 2.25,
				inArea: 4,
				sumY: 560,
				sumX: 1400,
				varianceShare: 1,
			},
		]);
		expect(told.origin.joins).toMatchObject([{ stratumKeys: ["IA-small", "IA-large"], step: "next_size" }]);
		expect(told.origin.totals).toEqual({ count: 9, y: 1260, x: 3150 });
		// Of six who sent in, four were used, one was set aside and one did not know.
		expect(told.origin.items).toEqual({ used: 4, setAside: 1, unanswered: 1, rate: 5 / 6 });
		expect(told.dispositions).toEqual([
			{ disposition: "complete", operations: 6, bearingTrees: 2200 },
			{ disposition: "not_reached", operations: 3, bearingTrees: 4040 },
		]);
		expect(told.response.counted.rr1).toBeCloseTo(6 / 9, 12);
		expect(told.response.weighted.rr1).toBeCloseTo(2200 / 6240, 12);
	});

	test("counts one area's growers only, and keeps the whole stratum's weight", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		const told = (await origin(iowa, surveyId, "19113"))!;
		expect(told.dispositions).toEqual([{ disposition: "complete", operations: 1, bearingTrees: 2000 }]);
		expect(told.origin.strata).toMatchObject([{ weight: 2.25, inArea: 1, varianceShare: null }]);
	});

	test("is not found for what there is not: area, crop, measure, or a county of another state", async () => {
		const surveyId = await surveyOf(owner, both, ["19", "55"], [...iowaTold, ...wisconsinTold]);
		expect(await origin(wisconsin, surveyId, "19103")).toBeUndefined();
		expect(await origin(wisconsin, surveyId, "network")).toBeUndefined();
		expect(await origin(iowa, surveyId, "99999")).toBeUndefined();
		expect(await origin(iowa, surveyId, "19", "crop_loss", "melon")).toBeUndefined();
		expect(await origin(iowa, surveyId, "19", "gossip")).toBeUndefined();
		expect(await origin(wisconsin, surveyId, "55025")).toBeDefined();
	});

	test("has every number in its file, unrounded", async () => {
		const surveyId = await surveyOf(owner, both, ["19"], iowaTold);
		const told = (await origin(iowa, surveyId, "19"))!;
		const lines = figureOriginCsv(told).split("\r\n");
		expect(lines[0]).toBe("part,of,item,value");
		expect(lines).toContain(`figure,,standard_error,${told.origin.estimate!.standardError}`);
		expect(lines).toContain("stratum,IA-small+IA-large,weight,2.25");
		expect(lines).toContain("joined,IA-small+IA-large,step,next_size");
		expect(lines).toContain("answers,,set_aside,1");
		expect(lines).toContain("disposition,complete,operations,6");
		expect(lines).toContain(`response_rate,operations,rr1,${6 / 9}`);
	});
});
