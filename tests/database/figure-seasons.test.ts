import { beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { normal975 } from "#app/estimate/distributions.ts";
import { type PairedAnswers, pairedMomentsOf } from "#app/lib/paired-moments.ts";
import { findFigureOrigin } from "#app/routes/desk/parts/estimates/figure-origin.server.ts";
import { pairsOfArea, readBothSeasons } from "#app/tally/both-seasons.server.ts";
import { addOperation, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin } = await openSurveysDatabase();
let operations: string[];
let before: string;
let now: string;

/** What the i-th operation lost and normally picks, in two seasons; null where it did not answer. Who is silent mostly stays so. */
const told = (i: number, season: 0 | 1): [number, number] | null =>
	i % 7 === 3 || (season === 1 && i === 11) ? null : [100 + 13 * i + 90 * season, 1000 + 20 * i + 5 * season * i];
const size = 24;

async function ask(season: 0 | 1): Promise<string> {
	const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"], { season: 2031 + season })));
	const { surveyId } = made as { surveyId: string };
	await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId));
	for (const [i, operationId] of operations.entries()) {
		const answer = told(i, season);
		if (!answer) continue;
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
				stratum_key, y, x, set_aside)
			select survey_id, 'crop_loss', 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, $3, $4, $5
			from collect.frame_operation where survey_id = $1 and operation_id = $2`,
			[surveyId, operationId, ...answer, i === 20 && season === 1],
		);
	}
	return surveyId;
}

beforeAll(async () => {
	operations = [];
	for (let i = 0; i < size; i++) {
		const operationId = await addOperation(owner, { state: "19", trees: i % 3 === 0 ? 2000 : 40 });
		const county = i % 2 ? "19103" : "19113";
		await owner.query("update directory.operation set county_fips = $2 where operation_id = $1", [operationId, county]);
		operations.push(operationId);
	}
	before = await ask(0);
	// One has grown since, and one has moved to another county of the state.
	await owner.query("update directory.planting set bearing_trees = 2000 where operation_id = $1", [operations[1]]);
	await owner.query("update directory.operation set county_fips = '19103' where operation_id = $1", [operations[2]]);
	now = await ask(1);
});

const read = (viewer: Associate) =>
	asDesk(viewer, (trx) => readBothSeasons(trx, { before, now, measureKey: "crop_loss", cropKey: "apple" }));
/** Those that answered both times, with what is to be left out taken out by hand. */
const answeredBoth = (keep: (i: number) => boolean) =>
	Array.from({ length: size }, (_, i) => i)
		.filter((i) => told(i, 0) && told(i, 1) && i !== 20 && i !== 1 && keep(i))
		.map((i): PairedAnswers => {
			const [first, second] = [told(i, 0)!, told(i, 1)!];
			return { yBefore: first[0], xBefore: first[1], yNow: second[0], xNow: second[1] };
		});

test("the paired moments are those of the operations that answered both times and stayed in their stratum", async () => {
	const both = await read(iowa);
	const strata = [...both.frame].toSorted(([a], [b]) => (a < b ? -1 : 1));
	expect(strata.map(([, n]) => n).reduce((sum, n) => sum + n, 0)).toBe(size - 1);
	for (const [large, i] of [
		[true, 0],
		[false, 2],
	] as const) {
		const { rows } = await owner.query(
			"select stratum_key from collect.frame_operation where operation_id = $1 limit 1",
			[operations[i]],
		);
		const stratumKey = rows[0].stratum_key as string;
		const isLarge = (at: number) => (at % 3 === 0) === large;
		expect(both.respondents.get(stratumKey)).toBe(answeredBoth(isLarge).length);
		// The one that moved answered both times and lies in no county both times.
		for (const county of ["19103", "19113"]) {
			const expected = pairedMomentsOf(
				answeredBoth((at) => isLarge(at) && at !== 2 && (at % 2 ? "19103" : "19113") === county),
			);
			const found = pairsOfArea(both.pairs, (fips) => fips === county).find((pair) => pair.stratumKey === stratumKey);
			expect(found!.n).toBe(expected.n);
			for (const [key, value] of Object.entries(expected))
				expect(found![key as keyof typeof expected] / value, `${county} ${key}`).toBeCloseTo(1, 9);
		}
	}
});

test("another state's desk pairs nobody", async () => {
	const both = await read(wisconsin);
	expect({ frame: both.frame.size, pairs: both.pairs }).toEqual({ frame: 0, pairs: [] });
});

test("a figure is told beside last season's, with the change and what is usual", async () => {
	const found = await asDesk(iowa, (trx) =>
		findFigureOrigin(trx, iowa, { surveyId: now, areaKey: "19", cropKey: "apple", measureKey: "crop_loss" }),
	);
	const { earlier, change, usual } = found!.seasons;
	expect(earlier.map(({ surveyId, season }) => [surveyId, season])).toEqual([[before, 2031]]);
	const past = earlier[0]!.figure!;
	const present = found!.origin.estimate!;
	expect(change).toMatchObject({ since: 2031, missing: null });
	expect(change!.difference!).toBeCloseTo(present.value! - past.value, 9);
	// Those that answer both times move together: the change is surer than two seasons that know nothing of each other.
	const apart = Math.hypot(present.standardError!, past.standardError);
	const standardError = (change!.interval!.upper - change!.interval!.lower) / 2 / normal975;
	expect(standardError).toBeLessThan(apart);
	expect(standardError).toBeGreaterThan(0);
	expect(usual!.difference.value).toBeCloseTo(present.value! - past.value, 9);
	expect(usual!.difference.standardError).toBeCloseTo(apart, 9);
	const first = await asDesk(iowa, (trx) =>
		findFigureOrigin(trx, iowa, { surveyId: before, areaKey: "19", cropKey: "apple", measureKey: "crop_loss" }),
	);
	expect(first!.seasons).toEqual({ earlier: [], change: null, usual: null });
});
