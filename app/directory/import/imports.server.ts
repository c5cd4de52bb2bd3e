import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { FileRefused } from "./cells.ts";
import type { ImportChoices } from "./columns.ts";

export type ImportStatus =
	"reading" | "columns" | "checking" | "checked" | "importing" | "imported" | "undoing" | "undone" | "dropped";
/** Why a step came to nothing: words at `growers:import.refused.<code>`. */
export type ImportFailure = {
	why: FileRefused | "states_changed" | "list_changed" | "rests_on_it" | "broke_off";
	/** Some of the operations in the way, and how many there are. */
	names?: string[];
	count?: number;
};
export type ImportCounts = { rows: number; bad: number; operations: number; matched: number; plantings: number };

/** The files that were read in by associates of no more than the viewer's states, newest first. */
export async function listImports(trx: Trx, viewer: Associate, limit = 50) {
	return selectImports(trx, viewer).orderBy("i.created_at", "desc").orderBy("i.import_id").limit(limit).execute();
}

/** @returns undefined also for a file of somebody who held other states. */
export async function findImport(trx: Trx, viewer: Associate, importId: string) {
	if (!z.guid().safeParse(importId).success) return undefined;
	return selectImports(trx, viewer).where("i.import_id", "=", importId).executeTakeFirst();
}
export type Import = NonNullable<Awaited<ReturnType<typeof findImport>>>;

/** The one place that says whose imports an associate can see: those of nobody who held a state that the viewer does not. */
function selectImports(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("directory.import as i")
		.innerJoin("auth.person as p", "p.person_id", "i.person_id")
		.where(sql<boolean>`i.state_fips <@ ${viewer.stateFips}::text[]`)
		.where("i.status", "!=", "dropped")
		.select([
			"i.import_id as importId",
			"i.state_fips as stateFips",
			"i.file_name as fileName",
			"p.display_name as personName",
			sql<ImportStatus>`i.status`.as("status"),
			sql<string[] | null>`i.header`.as("header"),
			sql<ImportChoices | null>`i.choices`.as("choices"),
			sql<ImportCounts | null>`i.counts`.as("counts"),
			sql<ImportFailure | null>`i.failure`.as("failure"),
			"i.done",
			"i.total",
			"i.created_at as createdAt",
			"i.imported_at as importedAt",
			"i.undone_at as undoneAt",
			// A worker that died leaves its step standing still.
			sql<boolean>`i.touched_at < now() - interval '60 seconds'`.as("standsStill"),
		]);
}

/** Takes a file in. Its rows are read by queued work. */
export async function createImport(
	trx: Trx,
	viewer: Associate,
	{ fileName, file }: { fileName: string; file: Uint8Array },
): Promise<string> {
	const row = await trx
		.insertInto("directory.import")
		.values({
			person_id: viewer.personId,
			state_fips: viewer.stateFips,
			file_name: fileName.slice(-200),
			file: Buffer.from(file),
		})
		.returning("import_id")
		.executeTakeFirstOrThrow();
	return row.import_id;
}

/** From which states of an import each step may begin. A step that stands still may begin anew. */
const beginsFrom: Record<"checking" | "importing" | "undoing", ImportStatus[]> = {
	checking: ["columns", "checked", "checking"],
	importing: ["checked", "importing"],
	undoing: ["imported", "undoing"],
};

/**
 * Takes an import to its next step, which queued work then does. Pressed twice at once, the second finds it under way.
 * @returns "under_way" also for one that is past this step.
 */
export async function beginStep(
	trx: Trx,
	viewer: Associate,
	importId: string,
	step: keyof typeof beginsFrom,
	choices?: ImportChoices,
): Promise<"begun" | "not_found" | "under_way"> {
	const seen = await lockImport(trx, viewer, importId);
	if (!seen) return "not_found";
	if (!beginsFrom[step].includes(seen.status) || (seen.status === step && !seen.standsStill)) return "under_way";
	await trx
		.updateTable("directory.import")
		.set({ status: step, failure: null, done: 0, total: 0, touched_at: sql`now()` })
		// Whoever presses is who does it, and whose grants count.
		.$if(step === "importing", (row) => row.set({ person_id: viewer.personId }))
		.$if(step === "undoing", (row) => row.set({ undone_by: viewer.personId }))
		.$if(choices !== undefined, (row) => row.set({ choices: JSON.stringify(choices) }))
		.where("import_id", "=", importId)
		.execute();
	return "begun";
}

/** Gives up a file before anything of it is in the list: its rows go. */
export async function dropImport(trx: Trx, viewer: Associate, importId: string): Promise<"dropped" | "not_found"> {
	const seen = await lockImport(trx, viewer, importId);
	if (!seen || !["reading", "columns", "checking", "checked"].includes(seen.status)) return "not_found";
	await trx.deleteFrom("directory.import").where("import_id", "=", importId).execute();
	return "dropped";
}

export async function lockImport(trx: Trx, viewer: Associate, importId: string) {
	if (!(await findImport(trx, viewer, importId))) return undefined;
	await trx.selectFrom("directory.import").select("import_id").where("import_id", "=", importId).forUpdate().execute();
	return findImport(trx, viewer, importId);
}
