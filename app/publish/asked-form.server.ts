import type { Kysely } from "kysely";
import { AskedForm } from "#app/lib/asked-form.ts";
import { reader, type ReaderDB } from "./reader.server.ts";

export type KeptForm = { version: number; form: AskedForm };

/** The questions behind a release's figures; null for releases that were made before these were kept. */
export async function findAskedForm(releaseId: string, db: Kysely<ReaderDB> = reader()): Promise<KeptForm | null> {
	const row = await db
		.selectFrom("release.form")
		.select(["version", "definition"])
		.where("release_id", "=", releaseId)
		.executeTakeFirst();
	return row ? { version: row.version, form: AskedForm.parse(row.definition) } : null;
}
