import { readFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { execFile } from "node:child_process";
import { promisify } from "node:util";
import { sql } from "kysely";
import { expect, test } from "vitest";
import { connect } from "#db/connect.ts";
import { generateSchemaTypes } from "#db/schema-types.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";

const root = join(import.meta.dirname, "../..");

test("the generated types are those of the migrated database", async () => {
	await using database = await createTestDatabase();
	const outFile = join(tmpdir(), `schema-${process.pid}.ts`);
	generateSchemaTypes(database.ownerUrl, outFile);
	expect(await readFile(outFile, "utf8")).toBe(await readFile(join(root, "db/schema.ts"), "utf8"));
});

test("migrating a second time changes nothing", async () => {
	await using database = await createTestDatabase();
	const before = await describe(database.ownerUrl);
	const { stdout } = await promisify(execFile)(process.execPath, ["--import", "tsx", "db/migrate.ts"], {
		cwd: root,
		env: { ...process.env, DATABASE_OWNER_URL: database.ownerUrl, DATABASE_URL: database.appUrl },
	});
	expect(stdout).toContain("already up to date");
	expect(before.counties).toBe(360);
	expect(await describe(database.ownerUrl)).toEqual(before);
});

test("a district redrawn by the coordinator stays redrawn when the reference data is loaded again", async () => {
	await using database = await createTestDatabase();
	const db = connect(database.ownerUrl, { max: 1 });
	try {
		await db
			.updateTable("directory.county")
			.set({ district_key: "IA-6" })
			.where("county_fips", "=", "19169")
			.executeTakeFirstOrThrow();
		const { loadReference } = await import("#db/reference.ts");
		await loadReference(database.ownerUrl);
		const county = await db
			.selectFrom("directory.county")
			.select("district_key")
			.where("county_fips", "=", "19169")
			.executeTakeFirstOrThrow();
		expect(county.district_key).toBe("IA-6");
	} finally {
		await db.destroy();
	}
});

test("whatever points to an owner, an operation or a planting is found by an index when one is deleted", async () => {
	await using database = await createTestDatabase();
	const db = connect(database.ownerUrl, { max: 1 });
	try {
		const pointing = sql`select format('%s (%s)', c.conrelid::regclass, a.attname) as of, exists (
				select from pg_index i where i.indrelid = c.conrelid and i.indkey[0] = a.attnum
					and (i.indpred is null
						or pg_get_expr(i.indpred, i.indrelid) = format('(%s IS NOT NULL)', a.attname))) as indexed
			from pg_constraint c join pg_attribute a on a.attrelid = c.conrelid and a.attnum = c.conkey[1]
			where c.contype = 'f' and c.confrelid in
				('directory.owner'::regclass, 'directory.operation'::regclass, 'directory.planting'::regclass)`;
		const { rows } = await sql<{ of: string; indexed: boolean }>`${pointing} order by 1`.execute(db);
		expect(rows.length).toBeGreaterThan(10);
		expect(rows.filter(({ indexed }) => !indexed).map(({ of }) => of)).toEqual([]);
	} finally {
		await db.destroy();
	}
});

/** Every column, constraint and right of the product's schemas, and what the reference data came to. */
async function describe(ownerUrl: string) {
	const db = connect(ownerUrl, { max: 1 });
	try {
		const columns = await sql`select table_schema, table_name, column_name, data_type, is_nullable, column_default
			from information_schema.columns where table_schema in ('directory', 'collect', 'release', 'publish', 'readership', 'auth', 'log')
			order by 1, 2, 3`.execute(db);
		const constraints =
			await sql`select conrelid::regclass::text as on_table, conname, pg_get_constraintdef(oid) as rule
			from pg_constraint order by 1, 2`.execute(db);
		const rights = await sql`select relname, relacl::text from pg_class order by 1, 2`.execute(db);
		const { counties, neighbors } = await db
			.selectNoFrom((eb) => [
				eb
					.selectFrom("directory.county")
					.select((count) => count.fn.countAll<number>().as("n"))
					.as("counties"),
				eb
					.selectFrom("directory.county_neighbor")
					.select((count) => count.fn.countAll<number>().as("n"))
					.as("neighbors"),
			])
			.executeTakeFirstOrThrow();
		return { columns: columns.rows, constraints: constraints.rows, rights: rights.rows, counties, neighbors };
	} finally {
		await db.destroy();
	}
}
