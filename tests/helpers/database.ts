import { execFile } from "node:child_process";
import { createHash, randomBytes } from "node:crypto";
import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { promisify } from "node:util";
import { Client, escapeIdentifier } from "pg";

const root = join(import.meta.dirname, "../..");
/** Any number will do, as long as all who build templates on one cluster use the same. */
const templateLock = 7_402_115;

export type TestDatabase = AsyncDisposable & {
	ownerUrl: string;
	appUrl: string;
	readerUrl: string;
	drop(): Promise<void>;
};

/**
 * A database of the caller's own, cloned from a template that is migrated once a run (and, with `demo`, filled with the
 * demo's data once). It goes with `drop()`, or by itself at the end of the block: `await using database = ...`.
 */
export async function createTestDatabase({ seed = "none" }: { seed?: "none" | "demo" } = {}): Promise<TestDatabase> {
	const template = await ensureTemplate(seed);
	const name = `test_${randomBytes(8).toString("hex")}`;
	await asAdmin(async (admin) => {
		await createDatabase(admin, name, template);
		await grantConnect(admin, name);
	});
	const drop = () =>
		asAdmin(async (admin) => {
			await admin.query(`drop database if exists ${escapeIdentifier(name)} with (force)`);
		});
	return { ...urlsOf(name), drop, [Symbol.asyncDispose]: drop };
}

/** The addresses of a database for each role. */
function urlsOf(name: string): { ownerUrl: string; appUrl: string; readerUrl: string } {
	const urlFor = (variable: string) => {
		const url = new URL(required(variable));
		url.pathname = `/${name}`;
		return url.href;
	};
	return {
		ownerUrl: urlFor("TEST_OWNER_URL"),
		appUrl: urlFor("TEST_APP_URL"),
		readerUrl: urlFor("TEST_READER_URL"),
	};
}

function required(variable: string): string {
	const value = process.env[variable];
	if (!value) throw new Error(`${variable} is not set: tests that need a database run through npm test`);
	return value;
}

async function asAdmin<T>(work: (admin: Client) => Promise<T>): Promise<T> {
	const admin = new Client({ connectionString: required("TEST_DATABASE_ADMIN_URL"), application_name: "test-admin" });
	await admin.connect();
	try {
		return await work(admin);
	} finally {
		await admin.end();
	}
}

/** Rights on a database are not cloned with it. */
async function grantConnect(admin: Client, name: string): Promise<void> {
	const database = escapeIdentifier(name);
	await admin.query(`revoke all on database ${database} from public`);
	await admin.query(`grant connect on database ${database} to tallygrove_app, tallygrove_reader`);
}

async function createDatabase(admin: Client, name: string, template = "template0"): Promise<void> {
	await admin.query(
		`create database ${escapeIdentifier(name)} owner tallygrove_owner template ${escapeIdentifier(template)}`,
	);
}

/**
 * Makes the template when it is not there yet. It is named for the sources that shape it, so that a cluster that outlives
 * a change does not hand out yesterday's tables; and it takes its name only when complete.
 */
async function ensureTemplate(seed: "none" | "demo"): Promise<string> {
	const template = `template_${seed}_${await sourceHash(seed)}`;
	const exists = async (admin: Client) =>
		(await admin.query("select from pg_database where datname = $1", [template])).rowCount === 1;
	return asAdmin(async (admin) => {
		if (await exists(admin)) return template;
		await admin.query("select pg_advisory_lock($1)", [templateLock]);
		if (await exists(admin)) return template;
		const draft = `${template}_draft`;
		await admin.query(`drop database if exists ${escapeIdentifier(draft)} with (force)`);
		await createDatabase(admin, draft);
		await grantConnect(admin, draft);
		await runScript("db/migrate.ts", draft);
		if (seed === "demo") await runScript("db/seed/seed.ts", draft);
		await admin.query(`alter database ${escapeIdentifier(draft)} rename to ${escapeIdentifier(template)}`);
		return template;
	});
}

/** Runs a script of the product as the start command does, against one database. */
export async function runScript(script: string, database: string): Promise<void> {
	const { ownerUrl, appUrl, readerUrl } = urlsOf(database);
	const env = {
		...process.env,
		NODE_ENV: "test",
		DATABASE_OWNER_URL: ownerUrl,
		DATABASE_URL: appUrl,
		DATABASE_READER_URL: readerUrl,
		OAUTH_ISSUER: process.env.OAUTH_ISSUER ?? "http://localhost:4000",
	};
	await promisify(execFile)(process.execPath, ["--import", "tsx", script], { cwd: root, env });
}

async function sourceHash(seed: "none" | "demo"): Promise<string> {
	// The demo's figures run through the whole flow, so any source of the app may change them.
	const folders = seed === "none" ? ["db/migrations", "db/reference"] : ["db", "app", "fakes/sign-in"];
	const single = ["db/migrate.ts", "db/reference.ts", "app/directory/crops.ts"];
	const files = (await Promise.all(folders.map(filesUnder))).flat().concat(single);
	const hash = createHash("sha256");
	for (const file of files.toSorted()) hash.update(file).update(await readFile(join(root, file)));
	return hash.digest("hex").slice(0, 12);
}

async function filesUnder(folder: string): Promise<string[]> {
	const entries = await readdir(join(root, folder), { withFileTypes: true, recursive: true });
	return entries
		.filter((entry) => entry.isFile() && /\.(ts|tsx|mjs)$/.test(entry.name) && !entry.name.includes(".test."))
		.map((entry) => join(entry.parentPath, entry.name).slice(root.length + 1))
		.filter((file) => !/^db\/setup\/|^app\/(routes|components)\//.test(file));
}
