import { randomUUID } from "node:crypto";
import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { plainText } from "#app/lib/closeness.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { ImportChoices } from "./columns.ts";
import type { Entry, Planting } from "./entry.ts";
import { inChunks } from "./import-rows.server.ts";

/** How far the work has come, told while it is under way. */
export type Progress = (done: number, total: number) => Promise<void>;
type Row = { number: number; firstRow: number; entry: Entry; choice: string; operationId: string | null };
type Standing = { plantingId: string; cropKey: string; cultivar: string } & Record<
	"bearingTrees" | "youngTrees",
	number
> &
	Record<"areaAcres" | "plantedYear", number | null>;
export type Restore =
	| { made: "operation"; ownerId: string }
	| {
			made: "change";
			before: Record<string, unknown>;
			plantings: { plantingId: string; before: Standing | null; after: Planting }[];
	  };

/**
 * Writes all good rows of a file into the list, in the caller's transaction: new operations with an owner of their own,
 * and what the file tells of those that are in the list. Nothing is taken out of the list, and what a file does not tell stays.
 * @returns how many were made and changed, or that one in the list is gone since.
 */
export async function writeImport(
	trx: Trx,
	importId: string,
	choices: ImportChoices,
	tell: Progress,
): Promise<{ made: number; changed: number } | "list_changed"> {
	const groups = [...groupBy(await goodRows(trx, importId), ({ firstRow }) => firstRow).values()];
	const made = groups.filter(([first]) => first!.choice === "create");
	const changed = groups.filter(([first]) => first!.choice === "update");
	const total = made.length + changed.length;
	let done = 0;
	for (const part of inChunks(made)) {
		await makeOperations(trx, importId, part, choices);
		await tell((done += part.length), total);
	}
	for (const part of inChunks(changed)) {
		if (!(await changeOperations(trx, importId, part))) return "list_changed";
		await tell((done += part.length), total);
	}
	// The list is opened next, and the planner would take it for as small as it was.
	if (made.length > 1_000) await sql`select directory.know_operations()`.execute(trx);
	return { made: made.length, changed: changed.length };
}

async function goodRows(trx: Trx, importId: string): Promise<Row[]> {
	const rows = await trx
		.selectFrom("directory.import_row")
		.select(["row_number", "first_row", "entry", "choice", "operation_id"])
		.where("import_id", "=", importId)
		.where("problems", "=", sql<string>`'[]'`)
		.where("choice", "in", ["create", "update"])
		.orderBy("row_number")
		.execute();
	return rows.map((row) => ({
		number: row.row_number,
		firstRow: row.first_row!,
		entry: row.entry as unknown as Entry,
		choice: row.choice!,
		operationId: row.operation_id,
	}));
}

async function makeOperations(trx: Trx, importId: string, groups: Row[][], choices: ImportChoices): Promise<void> {
	const made = groups.map((rows) => ({
		rows,
		operationId: randomUUID(),
		ownerId: randomUUID(),
		entry: rows[0]!.entry,
	}));
	await trx
		.insertInto("directory.owner")
		.values(
			made.map(({ ownerId, entry }) => ({
				owner_id: ownerId,
				name: entry.ownerName ?? entry.contactName ?? entry.name,
			})),
		)
		.execute();
	await trx
		.insertInto("directory.operation")
		.values(
			made.map(({ operationId, ownerId, entry }) => ({
				operation_id: operationId,
				owner_id: ownerId,
				name: entry.name,
				county_fips: entry.countyFips,
				state_fips: entry.stateFips,
				contact_name: entry.contactName ?? entry.ownerName ?? entry.name,
				email: entry.email,
				phone: entry.phone,
				language: entry.language ?? choices.language,
				mass_unit: choices.massUnit,
			})),
		)
		.execute();
	const plantings = made.flatMap(({ rows, operationId }) =>
		rows.flatMap(({ entry: { planting } }) => (planting ? [{ operationId, planting, plantingId: randomUUID() }] : [])),
	);
	await addPlantings(trx, plantings);
	await noteRows(
		trx,
		importId,
		made.map(({ rows, operationId, ownerId }) => ({
			rows,
			operationId,
			restore: { made: "operation", ownerId },
		})),
	);
}

/** @returns false where one of them is no longer in the list. */
async function changeOperations(trx: Trx, importId: string, groups: Row[][]): Promise<boolean> {
	const ids = groups.map(([first]) => first!.operationId!);
	const standing = await trx
		.selectFrom("directory.operation")
		.select(["operation_id", "name", "contact_name", "email", "phone", "language", "county_fips", "state_fips"])
		.select(sql<Date | null>`mail_returned_at`.as("mail_returned_at"))
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(ids))))
		.where("status", "=", "active")
		.orderBy("operation_id")
		.forUpdate()
		.execute();
	const byId = new Map(standing.map((row) => [row.operation_id, row]));
	if (byId.size !== new Set(ids).size) return false;
	const plantings = groupBy(await standingPlantings(trx, ids), ({ operationId }) => operationId);
	const changes = groups.map((rows) => {
		const before = byId.get(rows[0]!.operationId!)!;
		return { rows, before, ...planChange(rows, plantings.get(before.operation_id) ?? []) };
	});
	await sql`update directory.operation o set contact_name = coalesce(j.contact_name, o.contact_name),
			email = coalesce(j.email, o.email), phone = coalesce(j.phone, o.phone), language = coalesce(j.language, o.language),
			name = j.name, county_fips = j.county_fips, state_fips = left(j.county_fips, 2), updated_at = now(),
			mail_returned_at = case when j.email is not null and lower(j.email) <> lower(coalesce(o.email, ''))
				then null else o.mail_returned_at end
		from jsonb_to_recordset(${JSON.stringify(changes.map(({ rows }) => columnsOf(rows[0]!)))}::jsonb) as j
			(operation_id uuid, name text, contact_name text, email text, phone text, language text, county_fips text)
		where o.operation_id = j.operation_id`.execute(trx);
	await addPlantings(
		trx,
		changes.flatMap(({ added }) => added),
	);
	await changePlantings(
		trx,
		changes.flatMap(({ changed }) => changed),
	);
	await noteRows(
		trx,
		importId,
		changes.map(({ rows, before, added, changed }) => ({
			rows,
			operationId: before.operation_id,
			restore: {
				made: "change",
				before,
				plantings: [
					...added.map(({ plantingId, planting }) => ({ plantingId, before: null, after: planting })),
					...changed.map(({ standing: was, planting }) => ({
						plantingId: was.plantingId,
						before: was,
						after: planting,
					})),
				],
			},
		})),
	);
	return true;
}

const columnsOf = ({ operationId, entry }: Row) => ({
	operation_id: operationId,
	name: entry.name,
	contact_name: entry.contactName,
	email: entry.email,
	phone: entry.phone,
	language: entry.language,
	county_fips: entry.countyFips,
});

type Added = { operationId: string; plantingId: string; planting: Planting };
type Changed = { standing: Standing; planting: Planting };

/** A planting of the same crop and cultivar is changed; another is added. */
function planChange(rows: Row[], standing: Standing[]): { added: Added[]; changed: Changed[] } {
	const added: Added[] = [];
	const changed: Changed[] = [];
	for (const { entry, operationId } of rows) {
		const { planting } = entry;
		if (!planting) continue;
		const same = standing.find(
			(row) => row.cropKey === planting.cropKey && plainText(row.cultivar) === plainText(planting.cultivar),
		);
		if (same) changed.push({ standing: same, planting });
		else added.push({ operationId: operationId!, plantingId: randomUUID(), planting });
	}
	return { added, changed };
}

async function standingPlantings(trx: Trx, ids: string[]): Promise<(Standing & { operationId: string })[]> {
	const rows = await trx
		.selectFrom("directory.planting")
		.select([
			"planting_id",
			"operation_id",
			"crop_key",
			"cultivar",
			"bearing_trees",
			"young_trees",
			"area_acres",
			"planted_year",
		])
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(ids))))
		.where("removed_on", "is", null)
		.orderBy("planting_id")
		.execute();
	return rows.map((row) => ({
		plantingId: row.planting_id,
		operationId: row.operation_id,
		cropKey: row.crop_key,
		cultivar: row.cultivar,
		bearingTrees: row.bearing_trees,
		youngTrees: row.young_trees,
		areaAcres: row.area_acres,
		plantedYear: row.planted_year,
	}));
}

async function addPlantings(trx: Trx, added: Added[]): Promise<void> {
	for (const part of inChunks(added))
		await trx
			.insertInto("directory.planting")
			.values(
				part.map(({ operationId, plantingId, planting }) => ({
					planting_id: plantingId,
					operation_id: operationId,
					crop_key: planting.cropKey,
					cultivar: planting.cultivar,
					bearing_trees: planting.bearingTrees ?? 0,
					young_trees: planting.youngTrees ?? 0,
					area_acres: planting.areaAcres,
					planted_year: planting.plantedYear,
				})),
			)
			.execute();
}

async function changePlantings(trx: Trx, changed: Changed[]): Promise<void> {
	const told = changed.map(({ standing, planting }) => ({ planting_id: standing.plantingId, ...planting }));
	await sql`update directory.planting p set bearing_trees = coalesce(j."bearingTrees", p.bearing_trees),
			young_trees = coalesce(j."youngTrees", p.young_trees), area_acres = coalesce(j."areaAcres", p.area_acres),
			planted_year = coalesce(j."plantedYear", p.planted_year)
		from jsonb_to_recordset(${JSON.stringify(told)}::jsonb) as j
			(planting_id uuid, "bearingTrees" int, "youngTrees" int, "areaAcres" float8, "plantedYear" int)
		where p.planting_id = j.planting_id`.execute(trx);
}

type Noted = { rows: Row[]; operationId: string; restore: Restore };

/** Rows are found by their numbers: by their first rows, all of the file would be looked through for each part of it. */
async function noteRows(trx: Trx, importId: string, noted: Noted[]): Promise<void> {
	const told = noted.flatMap(({ rows, operationId, restore }) =>
		rows.map(({ number, firstRow }) => ({ number, operationId, restore: number === firstRow ? restore : null })),
	);
	await sql`update directory.import_row r set operation_id = j."operationId", restore = j.restore
		from jsonb_to_recordset(${JSON.stringify(told)}::jsonb) as j (number int, "operationId" uuid, restore jsonb)
		where r.import_id = ${importId} and r.row_number = j.number`.execute(trx);
}
