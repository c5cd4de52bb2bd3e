import type { Kysely } from "kysely";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listHoldings } from "#app/protect/holdings.server.ts";
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

test("what an owner answered is summed over operations, and any other answer changes its digest", async () => {
	const surveyId = crypto.randomUUID();
	const [ada, otto, first, second] = Array.from({ length: 4 }, () => crypto.randomUUID());
	const place = {
		survey_id: surveyId,
		county_fips: "55025",
		state_fips: "55",
		stratum_key: "55|small",
		crop_key: "apple",
	};
	const fact = (owner_id: string, operation_id: string, measure_key: string, y: number, set_aside = false) => ({
		...place,
		owner_id,
		operation_id,
		measure_key,
		y,
		x: 1,
		set_aside,
	});
	await owner
		.insertInto("collect.fact")
		.values([
			fact(ada!, first!, "base.trees", 40),
			fact(ada!, second!, "base.trees", 60),
			fact(ada!, first!, "severity", 3),
			fact(otto!, crypto.randomUUID(), "base.trees", 9, true),
		])
		.execute();
	const list = () => owner.transaction().execute((trx) => listHoldings(trx, surveyId, { baseKeys: ["trees"] }));
	const [before, ...others] = await list();
	expect(others).toEqual([]);
	expect(before).toMatchObject({
		owner: ada,
		areaKey: "55025",
		cropKey: "apple",
		amounts: { respondents: 2, trees: 100 },
	});
	expect(await list()).toEqual([before]);
	await owner.updateTable("collect.fact").set({ y: 4 }).where("measure_key", "=", "severity").execute();
	const [after] = await list();
	expect(after).toEqual({ ...before, digest: after!.digest });
	expect(after!.digest).not.toBe(before!.digest);
});
