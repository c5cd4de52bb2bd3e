import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import {
	addPlanting as add,
	changePlanting,
	findPlanting,
	listPlantings,
	type PlantingFacts,
	pullOutPlanting,
	putBackPlanting,
	splitPlanting,
} from "#app/directory/plantings.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addPlanting, asGrower, growerOf, linkOf } from "./answering-fixture.ts";
import { addOperation, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** A grower with an operation of one apple planting: 100 bearing, 20 young, 4 acres. */
async function grower() {
	const operationId = await addOperation(owner, { state: "19", trees: 100 });
	const { rows } = await owner.query(
		`update directory.planting set young_trees = 20, area_acres = 4, planted_year = 2015, cultivar = 'Mixed'
		where operation_id = $1 returning planting_id`,
		[operationId],
	);
	const place = { operationId, plantingId: rows[0].planting_id as string };
	return { place, viewer: growerOf(operationId) };
}

const as = <T>(viewer: Grower, work: (trx: Trx) => Promise<T>) => asGrower(viewer, work);
const facts = (more: Partial<PlantingFacts> = {}): PlantingFacts => ({
	cultivar: "Amber Dot",
	bearingTrees: 60,
	youngTrees: 20,
	areaAcres: 2.5,
	plantedYear: 2015,
	...more,
});

async function rowsOf(operationId: string) {
	const { rows } = await owner.query(
		`select crop_key, cultivar, bearing_trees, young_trees, area_acres, planted_year, removed_on
		from directory.planting where operation_id = $1 order by bearing_trees desc, cultivar`,
		[operationId],
	);
	return rows;
}
const apple = { crop_key: "apple", removed_on: null, planted_year: 2015 };

test("a planting is added and changed as told", async () => {
	const { place, viewer } = await grower();
	const { operationId } = place;
	expect(
		await as(viewer, (trx) => add(trx, viewer, operationId, { cropKey: "plum", ...facts({ bearingTrees: 50 }) })),
	).toBe("added");
	expect(await as(viewer, (trx) => changePlanting(trx, viewer, place, facts({ areaAcres: null })))).toBe("changed");
	expect(await rowsOf(operationId)).toMatchObject([
		{ ...apple, cultivar: "Amber Dot", bearing_trees: 60, young_trees: 20, area_acres: null },
		{ ...apple, crop_key: "plum", cultivar: "Amber Dot", bearing_trees: 50, young_trees: 20, area_acres: 2.5 },
	]);
});

describe("splitting", () => {
	test("makes two of one that together have what it had, and the first stays the one that was", async () => {
		const { place, viewer } = await grower();
		const parts: [PlantingFacts, PlantingFacts] = [
			facts(),
			facts({ cultivar: "Quiet Red", bearingTrees: 40, youngTrees: 0, areaAcres: 1.5 }),
		];
		expect(await as(viewer, (trx) => splitPlanting(trx, viewer, place, parts))).toBe("split");
		expect(await rowsOf(place.operationId)).toMatchObject([
			{ ...apple, cultivar: "Amber Dot", bearing_trees: 60, young_trees: 20, area_acres: 2.5 },
			{ ...apple, cultivar: "Quiet Red", bearing_trees: 40, young_trees: 0, area_acres: 1.5 },
		]);
		expect(
			await count(owner, "directory.planting where planting_id = $1 and cultivar = 'Amber Dot'", [place.plantingId]),
		).toBe(1);
	});

	test.each([
		["plants were lost", { bearingTrees: 39 }, [["second.bearingTrees", 100]]],
		[
			"plants were won",
			{ bearingTrees: 41, youngTrees: 1 },
			[
				["second.bearingTrees", 100],
				["second.youngTrees", 20],
			],
		],
		["the area does not add up", { areaAcres: 1.4 }, [["second.areaAcres", 4]]],
		["the area is told of one part only", { areaAcres: null }, [["second.areaAcres", 4]]],
	] as const)("is refused and changes nothing where %s", async (_, wrong, problems) => {
		const { place, viewer } = await grower();
		const before = await rowsOf(place.operationId);
		const second = facts({ bearingTrees: 40, youngTrees: 0, areaAcres: 1.5, ...wrong });
		expect(await as(viewer, (trx) => splitPlanting(trx, viewer, place, [facts(), second]))).toEqual({
			problems: problems.map(([field, total]) => ({ field, code: "parts_total", detail: { total } })),
		});
		expect(await rowsOf(place.operationId)).toEqual(before);
	});
});

describe("pulling out", () => {
	test("keeps the planting with its day, and is undone", async () => {
		const { place, viewer } = await grower();
		expect(await as(viewer, (trx) => pullOutPlanting(trx, viewer, place, "2025-11-03"))).toBe("pulled_out");
		expect(await rowsOf(place.operationId)).toMatchObject([{ removed_on: "2025-11-03", bearing_trees: 100 }]);
		expect(await as(viewer, (trx) => findPlanting(trx, viewer, place))).toBeUndefined();
		expect(await as(viewer, (trx) => changePlanting(trx, viewer, place, facts()))).toBe("not_found");
		expect(await as(viewer, (trx) => listPlantings(trx, viewer, place.operationId))).toMatchObject({
			plantings: [{ plantingId: place.plantingId, removedOn: "2025-11-03" }],
		});

		expect(await as(viewer, (trx) => putBackPlanting(trx, viewer, place))).toBe("put_back");
		expect(await as(viewer, (trx) => putBackPlanting(trx, viewer, place))).toBe("put_back");
		expect(await rowsOf(place.operationId)).toMatchObject([{ removed_on: null }]);
	});

	test("before it was planted is refused", async () => {
		const { place, viewer } = await grower();
		expect(await as(viewer, (trx) => pullOutPlanting(trx, viewer, place, "2014-12-31"))).toEqual({
			problems: [{ field: "removedOn", code: "date_before_planting" }],
		});
		expect(await rowsOf(place.operationId)).toMatchObject([{ removed_on: null }]);
	});
});

test("another grower's plantings are neither seen nor changed, though they are there", async () => {
	const { viewer, place: own } = await grower();
	const { place: theirs } = await grower();
	const before = await rowsOf(theirs.operationId);
	expect(before).toHaveLength(1);
	expect(await as(viewer, (trx) => listPlantings(trx, viewer, theirs.operationId))).toBeUndefined();
	expect(await as(viewer, (trx) => add(trx, viewer, theirs.operationId, { cropKey: "plum", ...facts() }))).toBe(
		"not_found",
	);
	// Their planting under their operation, under the grower's own, and what is no id at all.
	const places = [theirs, { ...theirs, operationId: own.operationId }, { ...own, plantingId: "x" }];
	for (const place of places) {
		expect(await as(viewer, (trx) => findPlanting(trx, viewer, place))).toBeUndefined();
		expect(await as(viewer, (trx) => changePlanting(trx, viewer, place, facts()))).toBe("not_found");
		expect(await as(viewer, (trx) => splitPlanting(trx, viewer, place, [facts(), facts()]))).toBe("not_found");
		expect(await as(viewer, (trx) => pullOutPlanting(trx, viewer, place, "2025-11-03"))).toBe("not_found");
		expect(await as(viewer, (trx) => putBackPlanting(trx, viewer, place))).toBe("not_found");
	}
	expect(await rowsOf(theirs.operationId)).toEqual(before);
});

test("a personal link opens no list of plantings, nor does a grant for an operation that has left", async () => {
	const { place } = await grower();
	const byLink = linkOf({ surveyId: crypto.randomUUID(), operationId: place.operationId });
	expect(await as(byLink, (trx) => listPlantings(trx, byLink, place.operationId))).toBeUndefined();
	const operationId = await addOperation(owner, { state: "19", status: "left" });
	await addPlanting(owner, operationId, { crop: "plum" });
	const viewer = growerOf(operationId);
	expect(await as(viewer, (trx) => listPlantings(trx, viewer, operationId))).toBeUndefined();
});
