import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { findMapFigures, pairFiguresOf } from "#app/publish/figures.server.ts";
import type { Release } from "#app/publish/release.ts";
import { findRelease, listMeasures } from "#app/publish/releases.server.ts";
import { loader as figuresLoader } from "#app/routes/public/map-figures.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease } from "./publish-fixture.ts";
import { connectOwner, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let earlier: Release;
let later: Release;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	const added = [await addRelease(owner, 2030), await addRelease(owner, 2031)];
	// The earlier season's one shown county lies far from the later one's, so that classes of their own would differ.
	await owner.query("alter table release.figure disable trigger user");
	await owner.query("update release.figure set value = 12 where release_id = $1 and area_key = '19103'", [
		added[0]!.releaseId,
	]);
	await owner.query("alter table release.figure enable trigger user");
	[earlier, later] = (await Promise.all(added.map(({ number }) => findRelease(number)))) as [Release, Release];
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const crop_loss = async ({ releaseId }: Release) =>
	(await listMeasures(releaseId)).find(({ key }) => key === "crop_loss")!;

function figures(search: string): Promise<Response> {
	const request = new Request(`https://survey.example/map/figures${search}`);
	const params = { release: `${later.number}`, measure: "crop_loss", crop: "apple" };
	return figuresLoader({ request, params } as never);
}

test("two seasons are drawn in the same classes, each counting its own areas", async () => {
	const pair = await pairFiguresOf(later, await crop_loss(later), earlier, "apple", "county");
	const ranges = pair?.map(({ classes }) => classes.map(({ from, to, count }) => [from, to, count]));
	expect(ranges).toEqual([
		[
			[12, 12, 0],
			[38, 38, 1],
		],
		[
			[12, 12, 1],
			[38, 38, 0],
		],
	]);
	const alone = await findMapFigures(later.number, "crop_loss", "apple", "county");
	expect(alone?.classes).toEqual([{ from: 38, to: 38, count: 1 }]);
});

test("the live map is served the figures in the classes that it shares", async () => {
	const answer = await figures(`?kind=county&beside=${earlier.number}`);
	const { classes, cells } = (await answer.json()) as { classes: unknown[]; cells: Record<string, unknown>[] };
	expect(classes).toHaveLength(2);
	expect(cells.find(({ areaName }) => areaName === "Johnson")).toMatchObject({ value: 38, classIndex: 1 });
	expect(cells.find(({ areaName }) => areaName === "Linn")).not.toHaveProperty("value");
});

test("what cannot stand beside a map is not found, and a beside that is no number is refused", async () => {
	for (const beside of [later.number, 99_999]) expect((await figures(`?beside=${beside}`)).status).toBe(404);
	expect((await figures("?beside=first")).status).toBe(400);
	const otherUnit = { ...(await crop_loss(later)), unit: "lb" as const };
	expect(await pairFiguresOf(later, otherUnit, earlier, "apple", "county")).toBeUndefined();
});

test("figures are not served beside those of a withdrawn release", async () => {
	expect((await figures(`?beside=${earlier.number}`)).status).toBe(200);
	const withdrawn = { ...earlier, withdrawn: { at: "2031-01-01T00:00:00Z", reason: { en: "x", es: "x" } } };
	expect(await pairFiguresOf(later, await crop_loss(later), withdrawn, "apple", "county")).toBeUndefined();
});
