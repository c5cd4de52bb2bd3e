import type { Trx } from "#app/auth/scope.server.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { compareCrops } from "./crops.ts";

/** A row a planting; an operation without one has a row of its own. */
export type FileRow = {
	operationId: string;
	name: string;
	ownerName: string;
	contactName: string;
	email: string | null;
	phone: string | null;
	countyName: string;
	statePostal: string;
	language: "en" | "es";
};

/** The header of the file of growers, which reading in a list understands as it stands. */
export const fileHeader = [
	"operation",
	"owner",
	"contact",
	"email",
	"telephone",
	"county",
	"state",
	"language",
	"crop",
	"cultivar",
	"bearing_trees",
	"young_trees",
	"area_acres",
	"year_planted",
] as const;

/** How many plantings the file of these operations tells. */
export async function countPlantings(trx: Trx, operationIds: string[]): Promise<number> {
	const { count } = await trx
		.selectFrom("directory.planting")
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.where("removed_on", "is", null)
		.select((eb) => eb.fn.countAll<number>().as("count"))
		.executeTakeFirstOrThrow();
	return count;
}

/** The rows of the file under `fileHeader`, in the order of the operations. The caller has narrowed them. */
export async function listFileRows(trx: Trx, operations: FileRow[]): Promise<(string | number | null)[][]> {
	const ids = operations.map(({ operationId }) => operationId);
	const plantings = await trx
		.selectFrom("directory.planting")
		.select(["operation_id", "crop_key", "cultivar", "bearing_trees", "young_trees", "area_acres", "planted_year"])
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(ids))))
		.where("removed_on", "is", null)
		.orderBy("cultivar")
		.orderBy("planting_id")
		.execute();
	const grown = groupBy(plantings, (planting) => planting.operation_id);
	return operations.flatMap((operation) => {
		const { name, ownerName, contactName, email, phone, countyName, statePostal, language } = operation;
		const told = [name, ownerName, contactName, email, phone, countyName, statePostal, language];
		const rows = (grown.get(operation.operationId) ?? []).toSorted((a, b) => compareCrops(a.crop_key, b.crop_key));
		if (rows.length === 0) return [[...told, null, null, null, null, null, null]];
		return rows.map((row) => [
			...told,
			row.crop_key,
			row.cultivar,
			row.bearing_trees,
			row.young_trees,
			row.area_acres,
			row.planted_year,
		]);
	});
}
