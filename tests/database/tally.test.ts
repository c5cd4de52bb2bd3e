import type { Kysely } from "kysely";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listCropRespondents, listFrameStrata, listTallies } from "#app/tally/tally.server.ts";
import { tallyOf } from "#app/tally/tally.ts";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Kysely<DB>;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = connect(database.ownerUrl);
});
afterAll(async () => {
	await owner.destroy();
	await database.drop();
});

type NewFact = { county?: string; stratum?: string; crop?: string; y: number; x: number; setAside?: boolean };

/** Adds a survey's facts, one operation each, and gives the survey's id. */
async function surveyWith(...facts: NewFact[]): Promise<string> {
	const surveyId = crypto.randomUUID();
	const rows = facts.map(({ county = "55025", stratum = "55|small", crop = "apple", y, x, setAside = false }) => ({
		survey_id: surveyId,
		measure_key: "loss",
		crop_key: crop,
		operation_id: crypto.randomUUID(),
		owner_id: crypto.randomUUID(),
		county_fips: county,
		state_fips: county.slice(0, 2),
		stratum_key: stratum,
		y,
		x,
		set_aside: setAside,
	}));
	await owner.insertInto("collect.fact").values(rows).execute();
	return surveyId;
}

async function addOperation(): Promise<string> {
	const place = { county_fips: "55025", state_fips: "55" };
	const { owner_id } = await owner
		.insertInto("directory.owner")
		.values({ name: "Ada Quill" })
		.returning("owner_id")
		.executeTakeFirstOrThrow();
	const { operation_id } = await owner
		.insertInto("directory.operation")
		.values({ ...place, owner_id, name: "Quail Bend Orchard", contact_name: "Ada Quill" })
		.returning("operation_id")
		.executeTakeFirstOrThrow();
	return operation_id;
}

/** A survey whose frame holds these operations, each with apples. */
async function surveyOf(...operations: string[]): Promise<string> {
	const { form_id } = await owner
		.insertInto("collect.form")
		.values({ form_key: "frame_form" })
		.returning("form_id")
		.executeTakeFirstOrThrow();
	const { form_version_id } = await owner
		.insertInto("collect.form_version")
		.values({ form_id, version: 1, definition: "{}" })
		.returning("form_version_id")
		.executeTakeFirstOrThrow();
	const { survey_id } = await owner
		.insertInto("collect.survey")
		.values({ form_version_id, season: 2031, title: "{}", crop_keys: ["apple"], closes_at: new Date() })
		.returning("survey_id")
		.executeTakeFirstOrThrow();
	for (const operation_id of operations) {
		const frame = { survey_id, operation_id, owner_id: crypto.randomUUID(), county_fips: "55025", state_fips: "55" };
		await owner
			.insertInto("collect.frame_operation")
			.values({ ...frame, size_class: "small", stratum_key: "WI small" })
			.execute();
		await owner
			.insertInto("collect.frame_crop")
			.values({ survey_id, operation_id, crop_key: "apple", bearing_trees: 40 })
			.execute();
	}
	return survey_id;
}

function talliesOf(surveyId: string) {
	return owner.transaction().execute((trx) => listTallies(trx, surveyId));
}

test("the database's tallies are those of a two-pass computation", async () => {
	const facts = Array.from({ length: 40 }, (_, i) => ({ y: (i * 7919) % 1000, x: 1_000_000 + ((i * 104_729) % 5000) }));
	const [tally] = await talliesOf(await surveyWith(...facts));
	const expected = tallyOf(facts);
	expect(tally).toMatchObject({ measureKey: "loss", cropKey: "apple", countyFips: "55025", stateFips: "55", n: 40 });
	for (const key of ["sumY", "sumX", "mYY", "mXX", "mXY"] as const) {
		expect(tally![key] / expected[key], key).toBeCloseTo(1, 11);
	}
});

test("facts set aside are counted and summed nowhere", async () => {
	const tallies = await talliesOf(
		await surveyWith(
			{ y: 10, x: 100 },
			{ y: 900, x: 1000, setAside: true },
			{ y: 900, x: 1000, setAside: true, county: "55021" },
		),
	);
	expect(tallies.map(({ countyFips, n, sumY, mXX, setAside }) => [countyFips, n, sumY, mXX, setAside])).toEqual([
		["55021", 0, 0, 0, 1],
		["55025", 1, 10, 0, 1],
	]);
});

test("another survey's facts, counties, crops and strata stay apart", async () => {
	await surveyWith({ y: 1, x: 1 });
	const tallies = await talliesOf(
		await surveyWith(
			{ y: 1, x: 10 },
			{ y: 2, x: 10, stratum: "55|large" },
			{ y: 3, x: 10, crop: "plum" },
			{ y: 4, x: 10, county: "19103", stratum: "19|small" },
		),
	);
	expect(tallies.map(({ cropKey, countyFips, stratumKey, sumY }) => [cropKey, countyFips, stratumKey, sumY])).toEqual([
		["apple", "19103", "19|small", 4],
		["apple", "55025", "55|large", 2],
		["apple", "55025", "55|small", 1],
		["plum", "55025", "55|small", 3],
	]);
});

test("a stratum's respondents to a crop are counted over counties, without those set aside", async () => {
	const surveyId = await surveyWith(
		{ y: 1, x: 1 },
		{ y: 1, x: 1, county: "55021" },
		{ y: 1, x: 1, setAside: true },
		{ y: 1, x: 1, stratum: "55|large" },
	);
	const respondents = await owner.transaction().execute((trx) => listCropRespondents(trx, surveyId));
	expect(respondents).toEqual([
		{ cropKey: "apple", stratumKey: "55|large", respondents: 1 },
		{ cropKey: "apple", stratumKey: "55|small", respondents: 2 },
	]);
});

test("the frame counts who has the crop, and nobody who turned out not to be eligible", async () => {
	const [operation, left] = [await addOperation(), await addOperation()];
	const surveyId = await surveyOf(operation, left);
	const strata = () => owner.transaction().execute((trx) => listFrameStrata(trx, surveyId));
	expect((await strata()).map(({ cropKey, frameSize }) => [cropKey, frameSize])).toEqual([
		["all", 2],
		["apple", 2],
	]);
	await owner
		.updateTable("collect.frame_operation")
		.set({ disposition: "not_eligible" })
		.where("operation_id", "=", left)
		.execute();
	expect((await strata()).map(({ cropKey, frameSize }) => [cropKey, frameSize])).toEqual([
		["all", 1],
		["apple", 1],
	]);
});

test("a survey without facts or frame has no tallies and no strata", async () => {
	const surveyId = crypto.randomUUID();
	expect(await talliesOf(surveyId)).toEqual([]);
	expect(await owner.transaction().execute((trx) => listFrameStrata(trx, surveyId))).toEqual([]);
});
