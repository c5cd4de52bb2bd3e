import { promises as fs } from "node:fs";
import path from "node:path";
import { fileURLToPath } from "node:url";
import { runMigrations } from "graphile-worker";
import { FileMigrationProvider, Kysely, Migrator, PostgresDialect, sql } from "kysely";
import { Pool } from "pg";
import { loadReference } from "./reference.ts";

const migrationFolder = path.join(path.dirname(fileURLToPath(import.meta.url)), "migrations");

/**
 * Brings a database to the newest version: the product's own migrations as the owner, then the queue's tables as the
 * application's role, which must own them (their row-level security lets nobody else in), then the reference data.
 */
export async function migrate(ownerUrl: string, appUrl: string): Promise<string[]> {
	const db = new Kysely<unknown>({
		dialect: new PostgresDialect({ pool: new Pool({ connectionString: ownerUrl, max: 1 }) }),
	});
	try {
		const migrator = new Migrator({
			db,
			provider: new FileMigrationProvider({ fs, path, migrationFolder }),
			migrationTableSchema: "public",
		});
		const { error, results = [] } = await migrator.migrateToLatest();
		if (error) throw error;
		await migrateQueue(db, appUrl);
		await loadReference(ownerUrl);
		return results.map((result) => result.migrationName);
	} finally {
		await db.destroy();
	}
}

/** The queue's own migrations begin with `create schema if not exists`, which asks for CREATE on the database: lent, not given. */
async function migrateQueue(db: Kysely<unknown>, appUrl: string): Promise<void> {
	const database = new URL(appUrl).pathname.slice(1);
	await sql`grant create on database ${sql.id(database)} to tallygrove_app`.execute(db);
	try {
		await runMigrations({ connectionString: appUrl });
	} finally {
		await sql`revoke create on database ${sql.id(database)} from tallygrove_app`.execute(db);
	}
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
	const { DATABASE_OWNER_URL, DATABASE_URL } = process.env;
	if (!DATABASE_OWNER_URL || !DATABASE_URL) throw new Error("DATABASE_OWNER_URL and DATABASE_URL must be set");
	const applied = await migrate(DATABASE_OWNER_URL, DATABASE_URL);
	console.log(applied.length ? `applied ${applied.join(", ")}` : "already up to date");
}
