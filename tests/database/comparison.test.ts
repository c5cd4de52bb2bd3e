import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { findOwnFacts } from "#app/collect/own-facts.server.ts";
import { besideSentence } from "#app/jobs/beside-sentence.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { comparisonKey, findComparison } from "#app/publish/comparison.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { asGrower, askGrower, growerOf, linkOf } from "./answering-fixture.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let iowa: Associate;
let releaseId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	releaseId = (await addRelease(owner)).releaseId;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const loss = { measureKey: "crop_loss", cropKey: "apple" };
const beside = async (county: string, wanted = loss) =>
	(await findComparison(releaseId, county, [wanted]))?.cells[comparisonKey(wanted)];

test.each([
	["its own county, where that is shown", "19103", "19103", 38],
	["its district, where the county is withheld", "19113", "IA-3", 52],
	["the network, where county and state show nothing", "19169", "network", 41],
	["the network, where the county's figure is too rough and there is no district", "19153", "network", 41],
])("a grower is compared with %s", async (_what, county, areaKey, value) => {
	expect(await beside(county)).toMatchObject({ areaKey, value });
});

test("where no area shows a figure there is none, and a county out of the release has none at all", async () => {
	expect(await beside("19103", { measureKey: "yield_per_tree", cropKey: "apple" })).toBeUndefined();
	expect(await beside("19103", { measureKey: "crop_loss", cropKey: "plum" })).toBeUndefined();
	expect(await beside("55025")).toBeUndefined();
	expect(await findComparison("00000000-0000-4000-8000-000000000000", "19103", [loss])).toBeUndefined();
});

/** A grower with one fact in a survey: 30 of 120 pounds lost. */
async function answered() {
	const { place, grower } = await askGrower(owner, iowa);
	for (const [measure, y, x] of [
		["crop_loss", 30, 120],
		["base.lost", 30, 1],
	] as const)
		await owner.query(
			`insert into collect.fact select survey_id, $3, 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, $4, $5
			from collect.frame_operation where survey_id = $1 and operation_id = $2`,
			[place.surveyId, place.operationId, measure, y, x],
		);
	return { place, grower };
}

test("own figures are told in the measure's unit, and the release once there is one", async () => {
	const { place, grower } = await answered();
	const own = () => asGrower(grower, (trx) => findOwnFacts(trx, grower, place.surveyId));
	expect(await own()).toMatchObject({
		season: 2031,
		releaseId: null,
		operations: [
			{
				operationId: place.operationId,
				countyFips: "19103",
				figures: [{ measureKey: "crop_loss", cropKey: "apple", yesOrNo: false, value: 25 }],
			},
		],
	});
	await owner.query(
		`insert into collect.release_draft (survey_id, rules, drafted_by, status, audit, release_id)
		values ($1, '{}', $2, 'approved', '{"passed": true}', $3)`,
		[place.surveyId, iowa.personId, releaseId],
	);
	expect((await own())?.releaseId).toBe(releaseId);
});

test("a share of a crop is told as a figure, and only what was so or not so as yes or no", async () => {
	const { place, grower } = await answered();
	for (const [measure, crop, y, x] of [
		["freeze_loss", "apple", 30, 100],
		["freeze_loss", "all", 20, 100],
		["total_loss", "apple", 1, 1],
		["total_loss", "all", 0, 1],
	])
		await owner.query(
			`insert into collect.fact select survey_id, $3, $6, operation_id, owner_id, county_fips, state_fips, stratum_key, $4, $5
			from collect.frame_operation where survey_id = $1 and operation_id = $2`,
			[place.surveyId, place.operationId, measure, y, x, crop],
		);
	const own = await asGrower(grower, (trx) => findOwnFacts(trx, grower, place.surveyId));
	const told = own?.operations[0]?.figures.map((one) => [one.measureKey, one.cropKey, one.yesOrNo, one.value]);
	// What took the fruit was asked once, so that it stands beside the figure of all crops.
	expect(told).toEqual([
		["crop_loss", "apple", false, 25],
		["freeze_loss", "all", false, 20],
		["total_loss", "apple", true, 100],
	]);
});

test("another grower finds nothing, nor does whoever came by a link", async () => {
	const { place } = await answered();
	const { grower: other } = await askGrower(owner, iowa);
	expect(await asGrower(other, (trx) => findOwnFacts(trx, other, place.surveyId))).toBeUndefined();
	const visitor = linkOf(place);
	expect(await asGrower(visitor, (trx) => findOwnFacts(trx, visitor, place.surveyId))).toBeUndefined();
	// Not even with a viewer that lies, as the rows are out of the scope's reach.
	const liar = growerOf(place.operationId);
	expect(await asGrower(other, (trx) => findOwnFacts(trx, liar, place.surveyId))).toBeUndefined();
	expect(await count(owner, "collect.fact where operation_id = $1", [place.operationId])).toBe(2);
});

test("the thank-you says in one sentence how the grower's crop went around them, and nothing of their own answers", async () => {
	const { place } = await answered();
	const mailing = { survey_id: place.surveyId, operation_id: place.operationId, county_fips: "19113" };
	const say = async (language: "en" | "es", more = {}) => {
		const t = await mailWords(language);
		return besideSentence({ ...mailing, ...more }, { language, t, format: formatterFor(language, t) });
	};
	expect(await say("en")).toBeNull();
	await owner.query(
		`insert into collect.release_draft (survey_id, rules, drafted_by, status, audit, release_id)
		values ($1, '{}', $2, 'approved', '{"passed": true}', $3)`,
		[place.surveyId, iowa.personId, releaseId],
	);
	// The county is withheld: what stands there is its district's. The grower told of a loss of 25%.
	expect(await say("en")).toBe(
		"Around you, in East Iowa, growers lost 52% of a normal crop of apples, likely between 44 and 60%.",
	);
	expect(await say("es")).toContain("se perdió el 52% de una cosecha normal de manzana");
	expect(await say("en", { county_fips: "19103" })).toContain("in Johnson County, Iowa, growers lost 38%");
	expect(await say("en", { county_fips: "55025" })).toBeNull();
});
