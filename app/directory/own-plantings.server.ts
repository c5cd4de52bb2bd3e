import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { CropKey } from "./crops.ts";
import { findOwnOperation } from "./own-operation.server.ts";

/** What can be told of a planting; the crop stays what it was when it was written down. */
export type PlantingFacts = {
	cultivar: string;
	bearingTrees: number;
	youngTrees: number;
	areaAcres: number | null;
	plantedYear: number | null;
};
export type OwnPlanting = PlantingFacts & { plantingId: string; cropKey: CropKey; removedOn: string | null };
export type PlantingPlace = { operationId: string; plantingId: string };

/** All plantings of a grower's own operation, also those pulled out, in the order of crops. */
export async function listOwnPlantings(trx: Trx, viewer: Grower, operationId: string) {
	const operation = await findOwnOperation(trx, viewer, operationId);
	if (!operation) return undefined;
	const plantings = await selectPlantings(trx, operationId).execute();
	return { operation, plantings: plantings as OwnPlanting[] };
}

/** One that stands; what was pulled out is put back before it is changed. */
export async function findOwnPlanting(trx: Trx, viewer: Grower, { operationId, plantingId }: PlantingPlace) {
	const all = await listOwnPlantings(trx, viewer, operationId);
	const planting = all?.plantings.find((row) => row.plantingId === plantingId && row.removedOn === null);
	return all && planting && { operation: all.operation, planting };
}

export async function addPlanting(
	trx: Trx,
	viewer: Grower,
	operationId: string,
	{ cropKey, ...facts }: PlantingFacts & { cropKey: CropKey },
): Promise<"added" | "not_found"> {
	if (!(await findOwnOperation(trx, viewer, operationId))) return "not_found";
	await trx
		.insertInto("directory.planting")
		.values({ operation_id: operationId, crop_key: cropKey, ...columnsOf(facts) })
		.execute();
	return "added";
}

export async function changePlanting(
	trx: Trx,
	viewer: Grower,
	place: PlantingPlace,
	facts: PlantingFacts,
): Promise<"changed" | "not_found"> {
	if (!(await lockPlanting(trx, viewer, place))) return "not_found";
	await writeFacts(trx, place.plantingId, facts);
	return "changed";
}

/**
 * Makes two plantings of one, as when a part was grafted over or counted together. The first keeps what was answered
 * about the whole. Nothing may get lost or be won: what the whole had, the parts have together.
 */
export async function splitPlanting(
	trx: Trx,
	viewer: Grower,
	place: PlantingPlace,
	[first, second]: [PlantingFacts, PlantingFacts],
): Promise<"split" | "not_found" | { problems: Problem[] }> {
	const whole = await lockPlanting(trx, viewer, place);
	if (!whole) return "not_found";
	const problems = partsProblems(whole, first, second);
	if (problems.length > 0) return { problems };
	await writeFacts(trx, place.plantingId, first);
	await trx
		.insertInto("directory.planting")
		.values({ operation_id: place.operationId, crop_key: whole.cropKey, ...columnsOf(second) })
		.execute();
	return "split";
}

/** Notes the day on which a planting was pulled out. It stays in the list, and so does what was answered about it. */
export async function pullOutPlanting(
	trx: Trx,
	viewer: Grower,
	place: PlantingPlace,
	removedOn: string,
): Promise<"pulled_out" | "not_found" | { problems: Problem[] }> {
	const planting = await lockPlanting(trx, viewer, place);
	if (!planting) return "not_found";
	const { plantedYear } = planting;
	if (plantedYear !== null && Number(removedOn.slice(0, 4)) < plantedYear)
		return { problems: [{ field: "removedOn", code: "date_before_planting" }] };
	await trx
		.updateTable("directory.planting")
		.set({ removed_on: removedOn })
		.where("planting_id", "=", place.plantingId)
		.execute();
	return "pulled_out";
}

/** Undoes a pulling out. One that stands anyway stays as it is. */
export async function putBackPlanting(
	trx: Trx,
	viewer: Grower,
	{ operationId, plantingId }: PlantingPlace,
): Promise<"put_back" | "not_found"> {
	const all = await listOwnPlantings(trx, viewer, operationId);
	if (!all?.plantings.some((row) => row.plantingId === plantingId)) return "not_found";
	await trx
		.updateTable("directory.planting")
		.set({ removed_on: null })
		.where("planting_id", "=", plantingId)
		.where("operation_id", "=", operationId)
		.execute();
	return "put_back";
}

function selectPlantings(trx: Trx, operationId: string) {
	return trx
		.selectFrom("directory.planting as p")
		.innerJoin("directory.crop as c", "c.crop_key", "p.crop_key")
		.where("p.operation_id", "=", operationId)
		.select([
			"p.planting_id as plantingId",
			"p.crop_key as cropKey",
			"p.cultivar",
			"p.bearing_trees as bearingTrees",
			"p.young_trees as youngTrees",
			"p.area_acres as areaAcres",
			"p.planted_year as plantedYear",
			"p.removed_on as removedOn",
		])
		.orderBy("c.position")
		.orderBy("p.cultivar")
		.orderBy("p.planting_id");
}

/** Two changes at once meet here: the second sees what the first made of the planting. */
async function lockPlanting(trx: Trx, viewer: Grower, place: PlantingPlace): Promise<OwnPlanting | undefined> {
	if (!(await findOwnPlanting(trx, viewer, place))) return undefined;
	await trx
		.selectFrom("directory.planting")
		.select("planting_id")
		.where("planting_id", "=", place.plantingId)
		.forUpdate()
		.execute();
	return (await findOwnPlanting(trx, viewer, place))?.planting;
}

async function writeFacts(trx: Trx, plantingId: string, facts: PlantingFacts): Promise<void> {
	await trx.updateTable("directory.planting").set(columnsOf(facts)).where("planting_id", "=", plantingId).execute();
}

function columnsOf({ cultivar, bearingTrees, youngTrees, areaAcres, plantedYear }: PlantingFacts) {
	return {
		cultivar,
		bearing_trees: bearingTrees,
		young_trees: youngTrees,
		area_acres: areaAcres,
		planted_year: plantedYear,
	};
}

/** A hundredth of an acre may be lost to rounding when an area is told in two parts. */
const areaSlack = 0.01;

function partsProblems(whole: PlantingFacts, first: PlantingFacts, second: PlantingFacts): Problem[] {
	const problem = (name: keyof PlantingFacts, total: number): Problem => ({
		field: `second.${name}`,
		code: "parts_total",
		detail: { total },
	});
	const problems: Problem[] = [];
	for (const name of ["bearingTrees", "youngTrees"] as const) {
		if (first[name] + second[name] !== whole[name]) problems.push(problem(name, whole[name]));
	}
	if (whole.areaAcres !== null) {
		const parts = (first.areaAcres ?? 0) + (second.areaAcres ?? 0);
		const isBoth = first.areaAcres !== null && second.areaAcres !== null;
		if (!isBoth || Math.abs(parts - whole.areaAcres) > areaSlack) problems.push(problem("areaAcres", whole.areaAcres));
	}
	return problems;
}
