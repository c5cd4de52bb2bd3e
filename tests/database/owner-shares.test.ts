import type { Kysely } from "kysely";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listOwnerShares, type ShareQuery } from "#app/protect/owner-shares.server.ts";
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

type NewFact = { owner: string; y: number; x?: number; measure?: string; crop?: string; setAside?: boolean };

async function surveyWith(...facts: NewFact[]): Promise<string> {
	const surveyId = crypto.randomUUID();
	const rows = facts.map(({ owner: ownerId, y, x = 1, measure = "base.trees", crop = "apple", setAside = false }) => ({
		survey_id: surveyId,
		measure_key: measure,
		crop_key: crop,
		operation_id: crypto.randomUUID(),
		owner_id: ownerId,
		county_fips: "55025",
		state_fips: "55",
		stratum_key: "55|small",
		y,
		x,
		set_aside: setAside,
	}));
	await owner.insertInto("collect.fact").values(rows).execute();
	return surveyId;
}

/** Owners of the directory, the waived ones having allowed publication. */
async function owners(count: number, waived: readonly number[] = []): Promise<string[]> {
	const { person_id: by } = await owner
		.insertInto("auth.person")
		.values({ issuer: "https://id.example", subject: crypto.randomUUID(), display_name: "Ines Rowan" })
		.returning("person_id")
		.executeTakeFirstOrThrow();
	const rows = Array.from({ length: count }, (_, at) => ({
		owner_id: crypto.randomUUID(),
		name: "Ada Quill",
		...(waived.includes(at) && { publication_waived_at: new Date(), publication_waived_by: by }),
	}));
	await owner.insertInto("directory.owner").values(rows).execute();
	return rows.map((row) => row.owner_id);
}

const county = async (query: Omit<ShareQuery, "baseKeys">) => {
	const shares = await owner.transaction().execute((trx) => listOwnerShares(trx, { baseKeys: ["trees"], ...query }));
	return shares.find(({ areaKey, cropKey }) => areaKey === "55025" && cropKey === "apple")!;
};

test("what one owner holds in several operations is one amount, and what was set aside is none", async () => {
	const [a, b, c] = await owners(3);
	const surveyId = await surveyWith(
		{ owner: a!, y: 40 },
		{ owner: a!, y: 50 },
		{ owner: b!, y: 70 },
		{ owner: c!, y: 900, setAside: true },
	);
	expect(await county({ surveyId })).toMatchObject({
		owners: 2,
		quantities: { trees: { total: 160, top1: 90, top2: 70 }, respondents: { total: 3 } },
	});
});

test("the largest owner who did not allow publication is told from the largest of all", async () => {
	const [a, b, c, d] = await owners(4, [0, 2]);
	const surveyId = await surveyWith(...[a, b, c, d].map((id, at) => ({ owner: id!, y: [1000, 60, 300, 20][at]! })));
	const { owners: count, quantities } = await county({ surveyId, largestOwners: 2 });
	expect(count).toBe(4);
	expect(quantities.trees).toEqual({
		total: 1380,
		top1: 1000,
		top2: 300,
		guarded: { first: 60, other: 1000 },
		largest: 80,
	});
});

test("where the largest allowed nothing, shares are as they were without waivers", async () => {
	const [a, b] = await owners(2, [1]);
	const surveyId = await surveyWith({ owner: a!, y: 90 }, { owner: b!, y: 30 });
	expect((await county({ surveyId })).quantities.trees).toEqual({ total: 120, top1: 90, top2: 30 });
	expect((await county({ surveyId, largestOwners: 2 })).quantities.trees!.largest).toBe(90);
});

test("one answer of all to a sensitive question is told, two answers or another question are not", async () => {
	const ids = await owners(5);
	const told = async (values: number[], sensitiveKeys: string[]) => {
		const surveyId = await surveyWith(
			...ids.map((id) => ({ owner: id, y: 10 })),
			...values.map((y, at) => ({ owner: ids[at]!, y, measure: "seen" })),
		);
		return county({ surveyId, sensitiveKeys, countedKeys: sensitiveKeys });
	};
	expect(await told([1, 1, 1, 1, 1], ["seen"])).toMatchObject({ uniform: true, quantities: { seen: { total: 5 } } });
	expect(await told([0, 0, 0, 0, 0], ["seen"])).toMatchObject({ uniform: true, quantities: { seen: { total: 0 } } });
	expect(await told([1, 1, 0, 1, 1], ["seen"])).not.toHaveProperty("uniform");
	expect(await told([1, 1, 1, 1, 1], [])).not.toHaveProperty("uniform");
});
