import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { CropKey } from "./crops.ts";
import { findOperation } from "./operations.server.ts";
import { findOwnOperation } from "./own-operation.server.ts";

/** What can be told of a planting; the crop stays what it was when it was written down. */
export type PlantingFacts = {
	cultivar: string;
	bearingTrees: number;
	youngTrees: number;
	areaAcres: number | null;
	plantedYear: number | null;
};
export type NewPlanting = PlantingFacts & { cropKey: CropKey };
export type Planting = PlantingFacts & { plantingId: string; cropKey: CropKey; removedOn: string | null };
export type PlantingPlace = { operationId: string; plantingId: string };
/** Who keeps plantings current: a grower those of the own operations, an associate those of the granted states. */
export type Keeper = Grower | Associate;

/** All plantings of an operation that the viewer keeps, also those pulled out, in the order of crops. */
export async function listPlantings(trx: Trx, viewer: Keeper, operationId: string) {
	const operation = await findKept(trx, viewer, operationId);
	if (!operation) return undefined;
	const plantings = await selectPlantings(trx, operationId).execute();
	return { operation, plantings: plantings as Planting[] };
}

/** One that stands; what was pulled out is put back before it is changed. */
export async function findPlanting(trx: Trx, viewer: Keeper, { operationId, plantingId }: PlantingPlace) {
	const all = await listPlantings(trx, viewer, operationId);
	const planting = all?.plantings.find((row) => row.plantingId === plantingId && row.removedOn === null);
	return all && planting && { operation: all.operation, planting };
}

export async function addPlanting(
	trx: Trx,
	viewer: Keeper,
	operationId: string,
	{ cropKey, ...facts }: NewPlanting,
): Promise<"added" | "not_found"> {
	if (!(await findKept(trx, viewer, operationId))) return "not_found";
	await trx
		.insertInto("directory.planting")
		.values({ operation_id: operationId, crop_key: cropKey, ...columnsOf(facts) })
		.execute();
	await noteAtDesk(trx, viewer, operationId, "added");
	return "added";
}

export async function changePlanting(
	trx: Trx,
	viewer: Keeper,
	place: PlantingPlace,
	facts: PlantingFacts,
): Promise<"changed" | "not_found"> {
	if (!(await lockPlanting(trx, viewer, place))) return "not_found";
	await writeFacts(trx, place.plantingId, facts);
	await noteAtDesk(trx, viewer, place.operationId, "changed");
	return "changed";
}

/**
 * Makes two plantings of one, as when a part was grafted over or counted together. The first keeps what was answered
 * about the whole. Nothing may get lost or be won: what the whole had, the parts have together.
 */
export async function splitPlanting(
	trx: Trx,
	viewer: Keeper,
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
	await noteAtDesk(trx, viewer, place.operationId, "split");
	return "split";
}

/** Notes the day on which a planting was pulled out. It stays in the list, and so does what was answered about it. */
export async function pullOutPlanting(
	trx: Trx,
	viewer: Keeper,
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
	await noteAtDesk(trx, viewer, place.operationId, "pulled_out");
	return "pulled_out";
}

/** Undoes a pulling out. One that stands anyway stays as it is. */
export async function putBackPlanting(
	trx: Trx,
	viewer: Keeper,
	{ operationId, plantingId }: PlantingPlace,
): Promise<"put_back" | "not_found"> {
	const all = await listPlantings(trx, viewer, operationId);
	if (!all?.plantings.some((row) => row.plantingId === plantingId)) return "not_found";
	await trx
		.updateTable("directory.planting")
		.set({ removed_on: null })
		.where("planting_id", "=", plantingId)
		.where("operation_id", "=", operationId)
		.execute();
	await noteAtDesk(trx, viewer, operationId, "put_back");
	return "put_back";
}

async function findKept(trx: Trx, viewer: Keeper, operationId: string) {
	if (viewer.role === "grower") return findOwnOperation(trx, viewer, operationId);
	const operation = await findOperation(trx, viewer, operationId);
	if (operation?.status !== "active") return undefined;
	const { name, countyFips, countyName, stateFips, timeZone } = operation;
	return { operationId, name, countyFips, countyName, stateFips, timeZone };
}

/** What a grower does with the own plantings is nobody's to read; what the desk does for one is logged. */
async function noteAtDesk(trx: Trx, viewer: Keeper, operationId: string, what: string): Promise<void> {
	if (viewer.role !== "associate") return;
	await logEvent(trx, {
		personId: viewer.personId,
		action: "operation.planting_kept",
		subjectKind: "operation",
		subjectId: operationId,
		detail: { what },
	});
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
async function lockPlanting(trx: Trx, viewer: Keeper, place: PlantingPlace): Promise<Planting | undefined> {
	if (!(await findPlanting(trx, viewer, place))) return undefined;
	await trx
		.selectFrom("directory.planting")
		.select("planting_id")
		.where("planting_id", "=", place.plantingId)
		.forUpdate()
		.execute();
	return (await findPlanting(trx, viewer, place))?.planting;
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
