import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { Cell, Row } from "./cells.ts";
import type { CheckedRow } from "./check-rows.ts";
import type { Entry } from "./entry.ts";
import type { ImportCounts } from "./imports.server.ts";

const pageSize = 50;
const chunk = 1_000;

export const rowFilters = ["bad", "matched", "new"] as const;
/** `?show=&page=` of a file's rows. */
export const RowQuery = z.object({
	show: z.enum(rowFilters).nullable().catch(null),
	page: z.coerce.number().int().min(1).max(100_000).catch(1),
});
export type RowQuery = z.infer<typeof RowQuery>;

export const inChunks = <T>(items: readonly T[]): T[][] =>
	Array.from({ length: Math.ceil(items.length / chunk) }, (_, i) => items.slice(i * chunk, (i + 1) * chunk));

const isShown = {
	bad: sql<boolean>`r.problems <> '[]'`,
	matched: sql<boolean>`r.problems = '[]' and r.operation_id is not null and r.first_row = r.row_number`,
	new: sql<boolean>`r.problems = '[]' and r.operation_id is null and r.first_row = r.row_number`,
};

/** A page of a file's rows. The caller has found the import. */
export async function listImportRows(trx: Trx, importId: string, show: keyof typeof isShown, atPage: number) {
	const rows = trx.selectFrom("directory.import_row as r").where("r.import_id", "=", importId).where(isShown[show]);
	const { total } = await rows.select((eb) => eb.fn.countAll<number>().as("total")).executeTakeFirstOrThrow();
	const pageCount = Math.max(1, Math.ceil(total / pageSize));
	const page = Math.min(atPage, pageCount);
	const found = await rows
		.leftJoin("directory.operation as o", "o.operation_id", "r.operation_id")
		.select([
			"r.row_number as number",
			sql<Cell[] | null>`r.cells`.as("cells"),
			sql<Entry | null>`r.entry`.as("entry"),
			sql<Problem[]>`r.problems`.as("problems"),
			sql<"create" | "update" | "skip" | null>`r.choice`.as("choice"),
			"r.operation_id as operationId",
			"o.name as listedName",
		])
		.orderBy("r.row_number")
		.limit(pageSize)
		.offset((page - 1) * pageSize)
		.execute();
	return { rows: found, total, page, pageCount };
}
export type ImportRow = Awaited<ReturnType<typeof listImportRows>>["rows"][number];

/** All rows with something to mend, as they stood in the file. */
export async function listBadRows(trx: Trx, importId: string) {
	return trx
		.selectFrom("directory.import_row as r")
		.where("r.import_id", "=", importId)
		.where(isShown.bad)
		.select([sql<Cell[] | null>`r.cells`.as("cells"), sql<Problem[]>`r.problems`.as("problems")])
		.select("r.row_number as number")
		.orderBy("r.row_number")
		.execute();
}

/** Keeps what becomes of growers who are in the list already: for all of the file, or for some rows. */
export async function chooseForMatches(
	trx: Trx,
	importId: string,
	choices: "update" | "skip" | { number: number; choice: "create" | "update" | "skip" }[],
): Promise<void> {
	const matched = trx
		.updateTable("directory.import_row as r")
		.where("r.import_id", "=", importId)
		.where("r.problems", "=", sql<string>`'[]'`)
		.where("r.operation_id", "is not", null);
	if (typeof choices === "string") {
		await matched.set({ choice: choices }).execute();
		return;
	}
	// The rows of one operation go together.
	for (const { number, choice } of choices) await matched.set({ choice }).where("r.first_row", "=", number).execute();
}

export async function writeRows(trx: Trx, importId: string, rows: readonly Row[]): Promise<void> {
	await trx.deleteFrom("directory.import_row").where("import_id", "=", importId).execute();
	for (const part of inChunks(rows))
		await trx
			.insertInto("directory.import_row")
			.values(
				part.map(({ number, cells }) => ({ import_id: importId, row_number: number, cells: JSON.stringify(cells) })),
			)
			.execute();
}

export async function readRows(trx: Trx, importId: string): Promise<Row[]> {
	const rows = await trx
		.selectFrom("directory.import_row")
		.select(["row_number", "cells"])
		.where("import_id", "=", importId)
		.orderBy("row_number")
		.execute();
	return rows.map(({ row_number, cells }) => ({ number: row_number, cells: (cells ?? []) as Cell[] }));
}

/** Writes down how rows were judged. */
export async function writeChecked(trx: Trx, importId: string, rows: readonly CheckedRow[]): Promise<void> {
	const judged = rows.map(({ number, entry, problems, firstRow, operationId }) => ({
		number,
		entry: problems.length > 0 ? null : entry,
		problems,
		first_row: firstRow,
		choice: problems.length > 0 ? null : operationId ? "update" : "create",
		operation_id: operationId,
	}));
	await sql`update directory.import_row r set entry = j.entry, problems = j.problems, first_row = j.first_row,
			choice = j.choice, operation_id = j.operation_id
		from jsonb_to_recordset(${JSON.stringify(judged)}::jsonb)
			as j (number int, entry jsonb, problems jsonb, first_row int, choice text, operation_id uuid)
		where r.import_id = ${importId} and r.row_number = j.number`.execute(trx);
}

export async function countRows(trx: Trx, importId: string): Promise<ImportCounts> {
	const good = sql`r.problems = '[]'`;
	const first = sql`${good} and r.first_row = r.row_number`;
	return trx
		.selectFrom("directory.import_row as r")
		.where("r.import_id", "=", importId)
		.select([
			sql<number>`count(*)`.as("rows"),
			sql<number>`count(*) filter (where r.problems <> '[]')`.as("bad"),
			sql<number>`count(*) filter (where ${first})`.as("operations"),
			sql<number>`count(*) filter (where ${first} and r.operation_id is not null)`.as("matched"),
			sql<number>`count(*) filter (where ${good} and jsonb_typeof(r.entry -> 'planting') = 'object')`.as("plantings"),
		])
		.executeTakeFirstOrThrow();
}
