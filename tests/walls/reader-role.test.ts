import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { createTestDatabase } from "#tests/helpers/database.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let reader: Client;

beforeAll(async () => {
	database = await createTestDatabase();
	owner = new Client({ connectionString: database.ownerUrl });
	reader = new Client({ connectionString: database.readerUrl });
	await Promise.all([owner.connect(), reader.connect()]);
});
afterAll(async () => {
	await Promise.all([owner.end(), reader.end()]);
	await database.drop();
});

test("the reader is refused every table and view left of the release, listed from the catalogue", async () => {
	const { rows } = await owner.query<{ name: string }>(
		`select format('%I.%I', n.nspname, c.relname) as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
		where n.nspname in ('directory', 'collect', 'readership', 'auth', 'log') and c.relkind in ('r', 'p', 'v', 'm', 'f') order by 1`,
	);
	expect(rows.length).toBeGreaterThan(20);
	for (const { name } of rows) {
		// It is there: its owner can read it.
		await expect(owner.query(`select 1 from ${name} limit 1`), name).resolves.toBeDefined();
		await expect(reader.query(`select 1 from ${name} limit 1`), name).rejects.toMatchObject({ code: "42501" });
	}
});

test("the reader holds no right to write anywhere, and none at all on other tables", async () => {
	const { rows } = await owner.query<{ table: string; privilege: string }>(
		`select table_schema || '.' || table_name as table, privilege_type as privilege
		from information_schema.role_table_grants where grantee in ('tallygrove_reader', 'PUBLIC')
			and table_schema not in ('pg_catalog', 'information_schema')`,
	);
	expect(rows.length).toBeGreaterThan(0);
	expect(rows.filter(({ privilege }) => privilege !== "SELECT")).toEqual([]);
	expect(rows.filter(({ table }) => !/^(release|publish)\./.test(table))).toEqual([]);
	await expect(reader.query("insert into release.release default values")).rejects.toMatchObject({ code: "42501" });
});

test("the reader does not see who wrote or approved a report", async () => {
	for (const column of ["created_by", "published_by", "edited_by", "note"]) {
		await expect(reader.query(`select ${column} from publish.report`), column).rejects.toMatchObject({ code: "42501" });
	}
	await expect(reader.query("select slug, content from publish.report")).resolves.toBeDefined();
});
