import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listCounties } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { listCells } from "#app/publish/cells.server.ts";
import { findMapFigures } from "#app/publish/figures.server.ts";
import { findRelease, listCrops, listReleases } from "#app/publish/releases.server.ts";
import { loader as countiesLoader } from "#app/routes/public/map-counties.ts";
import { loader as figuresLoader } from "#app/routes/public/map-figures.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease, secret } from "./publish-fixture.ts";
import { connectOwner, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let release: Awaited<ReturnType<typeof addRelease>>;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	release = await addRelease(owner);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

type Loader = typeof figuresLoader | typeof countiesLoader;
function get(loader: Loader, path: string, params: Record<string, string> = {}, headers: Record<string, string> = {}) {
	const request = new Request(`https://survey.example${path}`, { headers });
	return (loader as (args: unknown) => Promise<Response> | Response)({ request, params });
}
const apple = () => ({ release: `${release.number}`, measure: "crop_loss", crop: "apple" });

test("the reader sees each county with its status, and a number only where one is shown", async () => {
	const cells = await listCells(release.releaseId, "crop_loss", "apple", "county");
	const told = cells.map(({ areaName, status, value, steadiness }) => [areaName, status, value, steadiness]);
	expect(told).toEqual([
		["Johnson", "shown", 38, "care"],
		["Linn", "withheld", null, null],
		["Polk", "shown", null, "rough"],
		["Story", "no_growers", null, null],
	]);
});

test("the tables refuse a number for a withheld county, whoever writes it", async () => {
	const sneak = owner.query(
		"insert into release.figure values ($1, 'crop_loss', 'apple', '19113', $2, 1, 0.1, 70, 76, 'steady')",
		[release.releaseId, secret],
	);
	await expect(sneak).rejects.toThrow("figure_of_hidden_cell");
	const body = await (await get(figuresLoader, "/map/figures", apple())).text();
	expect(body).not.toContain(`${secret}`);
	const linn = (JSON.parse(body) as { cells: { areaName: string }[] }).cells.find(
		({ areaName }) => areaName === "Linn",
	);
	expect(linn).toEqual({
		areaKey: "19113",
		areaName: "Linn",
		kind: "county",
		stateFips: "19",
		status: "withheld",
		look: "withheld",
	});
});

test("a map's figures carry a strong tag, and are not sent again to who has them", async () => {
	const first = await get(figuresLoader, "/map/figures", apple());
	const etag = first.headers.get("etag") ?? "";
	expect(etag).toMatch(/^"[\w-]+"$/);
	expect(first.headers.get("cache-control")).toMatch(/^public, max-age=60/);
	const second = await get(figuresLoader, "/map/figures", apple(), { "if-none-match": `"other", ${etag}` });
	expect(second.status).toBe(304);
	expect(await second.text()).toBe("");
	const district = await get(figuresLoader, "/map/figures?kind=district", apple(), { "if-none-match": etag });
	expect(district.status).toBe(200);
});

test("in the map of districts a county without one is drawn from none", async () => {
	const figures = await findMapFigures(release.number, "crop_loss", "apple", "district");
	expect(figures?.areaOfCounty).toEqual({ "19103": "IA-3", "19113": "IA-3", "19153": null, "19169": null });
	expect(figures?.cells.map(({ value }) => value)).toEqual([52]);
});

test.for([
	["release", "x", 400],
	["release", "0", 400],
	["release", "999", 404],
	["release", "99999999999", 400],
	["measure", "' or 1=1 --", 400],
	["measure", "acres", 404],
	["crop", "APPLE", 400],
	["crop", "fig", 404],
] as const)("a map's address with %s %s is refused as a problem with status %i", async ([key, value, status]) => {
	const answer = await get(figuresLoader, "/map/figures", { ...apple(), [key]: value });
	expect(answer.status).toBe(status);
	expect(answer.headers.get("content-type")).toBe("application/problem+json");
	expect(await answer.json()).toMatchObject({ status });
});

test("outlines may be kept for ever under the address that names their version, and no other", async () => {
	const plain = await get(countiesLoader, "/map/counties.json?states=19");
	const version = (plain.headers.get("etag") ?? "").slice(1, 13);
	expect(plain.headers.get("cache-control")).not.toContain("immutable");
	const versioned = await get(countiesLoader, `/map/counties.json?states=19&version=${version}`);
	expect(versioned.headers.get("cache-control")).toContain("immutable");
	const { counties } = (await versioned.json()) as { counties: { features: { id: number }[] } };
	// Iowa has 99 counties (Census Bureau, county code list); ids are numbers, as the map library needs.
	expect(counties.features).toHaveLength(99);
	expect(counties.features.every(({ id }) => Number.isInteger(id) && Math.floor(id / 1000) === 19)).toBe(true);
});

test("a network of every state has its outlines", async () => {
	const every = [...new Set(listCounties(usTopology()).map(({ stateFips }) => stateFips))];
	expect(every.length).toBeGreaterThan(50);
	const answer = await get(countiesLoader, `/map/counties.json?states=${every.join("-")}`);
	expect(answer.status).toBe(200);
});

test.for(["", "?states=99", "?states=abc", "?states=19-", `?states=${"19-".repeat(400)}19`])(
	"outlines of %s are refused",
	async (query) => {
		const answer = await get(countiesLoader, `/map/counties.json${query}`);
		expect([400, 404]).toContain(answer.status);
	},
);

test("releases are listed the latest first, and crops only where the measure has a figure", async () => {
	const later = await addRelease(owner, 2032);
	expect((await listReleases()).map(({ number }) => number)).toEqual([later.number, release.number]);
	expect((await findRelease(release.number))?.rules).toMatchObject({ minimumOwners: 5, careCv: 0.3 });
	expect(await listCrops(release.releaseId, "crop_loss")).toEqual(["apple"]);
	expect(await listCrops(release.releaseId, "yield_per_tree")).toEqual([]);
});
