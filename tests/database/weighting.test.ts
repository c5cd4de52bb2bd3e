import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { copySurvey } from "#app/collect/survey-life.server.ts";
import { createSurvey, findSurvey } from "#app/collect/surveys.server.ts";
import { chooseWeighting } from "#app/collect/weighting.server.ts";
import { calibratedEstimate, type DomainAnswer } from "#app/estimate/calibration/estimate.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import { rake } from "#app/estimate/calibration/raking.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { estimateByWeights } from "#app/jobs/weighed-estimates.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { approveDraft } from "#app/release/approval.server.ts";
import { createDraft, findLatestDraft, listDraftCells } from "#app/release/drafts.server.ts";
import { publishRelease } from "#app/release/publish.server.ts";
import { listDraftEstimates, readDraftInputs } from "#app/routes/desk/parts/estimates/draft-estimates.server.ts";
import { EstimatesQuery, WeightingQuery } from "#app/routes/desk/parts/estimates/estimates.schema.ts";
import { figureOriginCsv } from "#app/routes/desk/parts/estimates/figure-origin-csv.ts";
import { findFigureOrigin } from "#app/routes/desk/parts/estimates/figure-origin.server.ts";
import { previewWeighting } from "#app/routes/desk/parts/estimates/weighting-preview.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
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

/** What an operation has and told; its loss is of its normal crop of twenty pounds a tree. */
type Grower = { county: string; trees: number; loss: number | null };

// Two districts; of the small ones those with many trees answered more often, and the east more often than the west.
const growers: Grower[] = [
	...Array.from({ length: 24 }, (_, i) => ({
		county: i % 2 === 0 ? "19103" : "19113",
		trees: 12 + 3 * i,
		loss: i % 3 === 0 && i < 12 ? null : 5 + ((7 * i) % 40),
	})),
	...Array.from({ length: 16 }, (_, i) => ({
		county: "19001",
		trees: 15 + 5 * i,
		loss: i % 2 === 0 ? null : 20 + ((11 * i) % 50),
	})),
	...Array.from({ length: 14 }, (_, i) => ({
		county: i % 2 === 0 ? "19113" : "19001",
		trees: 150 + 55 * i,
		loss: i % 4 === 1 ? null : 10 + ((13 * i) % 30),
	})),
];
const answered = growers.flatMap(({ loss, ...grower }) => (loss === null ? [] : [{ ...grower, loss }]));
const isSmall = ({ trees }: { trees: number }) => trees < 100;
const isEast = ({ county }: { county: string }) => county !== "19001";
const treesOf = (some: readonly { trees: number }[]) => some.reduce((sum, { trees }) => sum + trees, 0);

let database: TestDatabase;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;
let surveyId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	await owner.query(`insert into directory.district (district_key, state_fips, name)
		values ('test-east', '19', 'East'), ('test-west', '19', 'West') on conflict do nothing`);
	await owner.query(`insert into directory.county (county_fips, state_fips, name)
		values ('19113', '19', 'Linn'), ('19001', '19', 'Adair') on conflict do nothing`);
	await owner.query(`update directory.county set district_key = case when county_fips in ('19103', '19113') then 'test-east'
		when county_fips = '19001' then 'test-west' end`);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
	surveyId = await answeredSurvey();
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function answeredSurvey(): Promise<string> {
	const operations: string[] = [];
	for (const { county, trees } of growers) {
		const operationId = await addOperation(owner, { state: "19", trees, email: null });
		await owner.query("update directory.operation set county_fips = $1 where operation_id = $2", [county, operationId]);
		operations.push(operationId);
	}
	const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"])));
	const id = (made as { surveyId: string }).surveyId;
	await asDesk(iowa, (trx) => openSurvey(trx, iowa, id));
	for (const [i, { trees, loss }] of growers.entries()) {
		if (loss === null) continue;
		for (const [measure, y, x] of [
			["crop_loss", (20 * trees * loss) / 100, 20 * trees],
			["base.bearing_trees", trees, 1],
			["base.normal_crop_lb", 20 * trees, 1],
			["base.harvested_lb", 20 * trees * (1 - loss / 100), 1],
		] as const)
			await owner.query(
				`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
					stratum_key, y, x)
				select survey_id, $3, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, $4, $5
				from collect.frame_operation, unnest(array['apple', 'all']) as c(crop_key)
				where survey_id = $1 and operation_id = $2`,
				[id, operations[i], measure, y, x],
			);
		await owner.query(
			"update collect.frame_operation set disposition = 'complete' where survey_id = $1 and operation_id = $2",
			[id, operations[i]],
		);
	}
	return id;
}

const choose = (viewer: Associate, weighting: Parameters<typeof chooseWeighting>[3], id = surveyId) =>
	asDesk(viewer, (trx) => chooseWeighting(trx, viewer, id, weighting));
const lossesByArea = async () => {
	const query = EstimatesQuery.parse({ crop: "apple", measure: "crop_loss" });
	const listed = await asDesk(iowa, (trx) => listDraftEstimates(trx, iowa, surveyId, query));
	return new Map(listed!.rows.map(({ area, figures }) => [area.key, figures[0]!]));
};

/** The strata, the known totals and the answers, all from the list above and none from the database. */
function byHand(calibrate: "linear" | "raked", isInside: (one: { county: string }) => boolean) {
	const sides = [isSmall, (one: { trees: number }) => !isSmall(one)];
	const strata = sides.map((isIn) => ({ all: growers.filter(isIn).length, n: answered.filter(isIn).length }));
	const stratumOf = (one: { trees: number }) => (isSmall(one) ? 0 : 1);
	const sample = {
		operations: answered.map((one) => {
			const { all, n } = strata[stratumOf(one)]!;
			return { stratum: stratumOf(one), weight: all / n };
		}),
		samplingFractions: strata.map(({ all, n }) => n / all),
	};
	const answers = answered.map((one): DomainAnswer =>
		isInside(one) ? { y: (20 * one.trees * one.loss) / 100, x: 20 * one.trees } : null,
	);
	const sizes = { name: "size", groups: answered.map((one) => `${stratumOf(one)}`) };
	const places = { name: "place", groups: answered.map((one) => (isEast(one) ? "east" : "west")) };
	const calibration =
		calibrate === "linear"
			? calibrateLinear(sample, [
					...strata.map(({ all }, at) => ({
						name: `size ${at}`,
						values: answered.map((one) => (stratumOf(one) === at ? 1 : 0)),
						total: all,
					})),
					{ name: "trees", values: answered.map(({ trees }) => trees), total: treesOf(growers) },
				])
			: rake(sample, [
					{ ...sizes, totals: new Map(strata.map(({ all }, at) => [`${at}`, all])) },
					{
						...places,
						totals: new Map([
							["east", growers.filter(isEast).length],
							["west", growers.filter((one) => !isEast(one)).length],
						]),
					},
				]);
	return { calibration, figure: calibratedEstimate("ratio", sample, calibration, answers)! };
}

test("by design weights, which a survey has until others are chosen, nothing is calibrated", async () => {
	const survey = await asDesk(iowa, (trx) => findSurvey(trx, iowa, surveyId));
	expect(survey).toMatchObject({ weighting: "design" });
	const inputs = await asDesk(iowa, (trx) => readDraftInputs(trx, iowa, surveyId));
	const made = await asDesk(iowa, (trx) => estimateByWeights(trx, inputs!));
	expect(made.calibrations).toEqual([]);
	expect(made.estimates.length).toBeGreaterThan(0);
});

test("the preview shows what a choice would change before it is made", async () => {
	const query = WeightingQuery.parse({ crop: "apple", try: "linear", level: "all" });
	const preview = (await asDesk(iowa, (trx) => previewWeighting(trx, iowa, surveyId, query)))!;
	expect(preview).toMatchObject({ weighting: "design", mayManage: true, isDrafted: false });
	const state = preview.rows.find(({ area }) => area.key === "19")!;
	const design = (await lossesByArea()).get("19")!;
	const { figure } = byHand("linear", () => true);
	expect(state.design.value).toBeCloseTo(design.value!, 9);
	expect(state.calibrated.value).toBeCloseTo(100 * figure.value, 9);
	expect(state.difference).toBeCloseTo(100 * figure.value - design.value!, 9);
	expect(state.errorChange).toBeCloseTo((100 * figure.standardError) / design.standardError! - 1, 9);
	expect(await asDesk(wisconsin, (trx) => previewWeighting(trx, wisconsin, surveyId, query))).toBeUndefined();
});

test.each(["linear", "raked"] as const)(
	"desk figures by %s weights are those of the pure functions fed by hand",
	async (weighting) => {
		expect(await choose(iowa, weighting)).toBe("chosen");
		expect(await choose(iowa, weighting)).toBe("unchanged");
		const losses = await lossesByArea();
		const areas = { "19": () => true, "test-east": isEast, "test-west": (one: { county: string }) => !isEast(one) };
		for (const [key, isInside] of Object.entries(areas)) {
			const { figure } = byHand(weighting, isInside);
			expect(losses.get(key)!.value, key).toBeCloseTo(100 * figure.value, 9);
			expect(losses.get(key)!.standardError, key).toBeCloseTo(100 * figure.standardError, 9);
		}
	},
);

test("weighted bearing trees reproduce the frame's total exactly, and leave no error", async () => {
	await choose(iowa, "linear");
	const inputs = (await asDesk(iowa, (trx) => readDraftInputs(trx, iowa, surveyId)))!;
	const measures = [{ key: "base.bearing_trees", kind: "total", scale: 1, unit: "trees" }] as const;
	const trees = async (weighting: "design" | "linear") => {
		const { estimates } = await asDesk(iowa, (trx) => estimateByWeights(trx, { ...inputs, measures, weighting }));
		return estimates.find(({ areaKey, cropKey }) => areaKey === "19" && cropKey === "apple")!;
	};
	const linear = await trees("linear");
	expect(linear.value).toBeCloseTo(treesOf(growers), 6);
	expect(linear.standardError! / linear.value!).toBeLessThan(1e-8);
	expect(Math.abs((await trees("design")).value! - treesOf(growers))).toBeGreaterThan(10);
});

test("a figure's page and file tell the totals, the weights and how they came about", async () => {
	await choose(iowa, "linear");
	const place = { surveyId, areaKey: "test-west", cropKey: "apple", measureKey: "crop_loss" };
	const told = (await asDesk(iowa, (trx) => findFigureOrigin(trx, iowa, place)))!;
	const { calibration, figure } = byHand("linear", (one) => !isEast(one));
	expect(told.origin.estimate!.value).toBeCloseTo(100 * figure.value, 9);
	expect(told.origin.calibrations).toMatchObject([{ stateFips: ["19"], respondents: answered.length, fallback: null }]);
	const [note] = told.origin.calibrations;
	expect(note!.smallest).toBeCloseTo(Math.min(...calibration.factors), 12);
	expect(note!.largest).toBeCloseTo(Math.max(...calibration.factors), 12);
	const known = note!.totals.find(({ of }) => of === "bearing_trees")!;
	expect(known).toMatchObject({ group: "19", total: treesOf(growers) });
	expect(known.byDesign).not.toBeCloseTo(known.total, 0);
	const weights = answered.flatMap((one, i) => (isEast(one) ? [] : [calibration.weights[i]!]));
	expect(told.origin.totals.count).toBeCloseTo(
		weights.reduce((sum, weight) => sum + weight, 0),
		9,
	);
	expect(told.origin.strata.reduce((sum, { varianceShare }) => sum + varianceShare!, 0)).toBeCloseTo(1, 12);
	const file = figureOriginCsv(told);
	expect(file).toContain("figure,,weighting,linear\r\n");
	expect(file).toContain(`known_total,19 bearing_trees 19,frame,${treesOf(growers)}\r\n`);
});

test("nobody of another state chooses, and a survey for next season takes the choice over", async () => {
	await choose(iowa, "raked");
	expect(await choose(wisconsin, "design")).toBe("not_found");
	expect(await count(owner, "collect.survey where survey_id = $1 and weighting = 'raked'", [surveyId])).toBe(1);
	const copy = (await asDesk(iowa, (trx) => copySurvey(trx, iowa, surveyId))) as { surveyId: string };
	expect(await asDesk(iowa, (trx) => findSurvey(trx, iowa, copy.surveyId))).toMatchObject({ weighting: "raked" });
	expect(
		await count(owner, "log.event where action = 'survey.weighted' and subject_id = $1", [surveyId]),
	).toBeGreaterThan(0);
});

test("a draft and its release carry the weights, and keep them", async () => {
	await choose(iowa, "linear");
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
	const made = await asDesk(iowa, (trx) => createDraft(trx, iowa, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	expect(await choose(iowa, "design")).toBe("already_drafted");
	await computeReleaseDraft(made);

	const draft = (await asDesk(iowa, (trx) => findLatestDraft(trx, iowa, surveyId)))!;
	expect(draft.status).toBe("audited");
	expect(draft.method).toMatchObject({ weighting: "linear" });
	const own = draft.method!.calibrations.find(({ cropKey }) => cropKey === "apple")!;
	expect(own).toMatchObject({ measureKeys: ["crop_loss"], stateFips: ["19"], fallback: null });
	expect(own.totals.find(({ of }) => of === "bearing_trees")).toMatchObject({ total: treesOf(growers) });
	const cells = await asDesk(iowa, (trx) => listDraftCells(trx, made.releaseDraftId));
	const state = cells.find(({ areaKey, cropKey }) => areaKey === "19" && cropKey === "apple")!;
	const { figure } = byHand("linear", () => true);
	expect(state.figures!.find(({ measureKey }) => measureKey === "crop_loss")!.value).toBeCloseTo(100 * figure.value, 9);

	const coordinator = {
		...(await addPerson(owner, "The coordinator", [])),
		role: "coordinator",
	} as unknown as Coordinator;
	const published = await scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		await approveDraft(trx, coordinator, made.releaseDraftId, new Date());
		return publishRelease(trx, made.releaseDraftId, "test");
	});
	expect(published).toMatchObject({ outcome: "published" });
	const release = await findReleaseById(made.releaseDraftId);
	expect(release!.method).toMatchObject({ weighting: "linear", calibration: { designKept: 0 } });
	// Totals of parts of the frame stay at the desk.
	const { rows } = await owner.query("select method from release.release where release_id = $1", [made.releaseDraftId]);
	expect(JSON.stringify(rows[0].method)).not.toContain("bearing_trees");
});
