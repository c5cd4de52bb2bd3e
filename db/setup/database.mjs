// This checkout's database, ready to use: cluster, roles, migrations.
import { join } from "node:path";
import { asAdmin, startCluster, stopCluster, watchCluster } from "./cluster.mjs";
import { hashFiles } from "./build.mjs";
import { databaseUrl, ensureDatabase, ensureRoles } from "./roles.mjs";
import { local, localSecrets, readState, remember, root, writePrivate } from "./local.mjs";
import { atEnd, end } from "./end.mjs";
import { run } from "./run.mjs";
import { step } from "./steps.mjs";

const tsx = join(root, "node_modules/.bin/tsx");

/** @returns { cluster, addresses } of the private database. Unless it was left running on purpose, it stops at the end. */
export async function preparePrivateDatabase({ stays = false } = {}) {
	let cluster;
	await step("Database cluster", async () => {
		const left = stays || readState().databaseStays === true;
		cluster = await startCluster({ name: "demo", guarded: !stays });
		if (left && cluster.wasRunning) cluster.guard?.dismiss();
		else if (!stays) atEnd(() => stopCluster(cluster));
		if (!stays) {
			watchCluster(cluster, () => {
				console.error(`\nThe database ended by itself, so everything stops. Its log: ${cluster.log}`);
				end(1);
			});
		}
		remember({ databaseStays: stays || (left && cluster.wasRunning) });
		return `PostgreSQL ${cluster.version} on 127.0.0.1:${cluster.port}${cluster.wasRunning ? ", was running" : ""}`;
	});
	await step("Roles and database", async () => {
		await ensureRoles(cluster);
		await ensureDatabase(cluster);
	});
	const addresses = {
		DATABASE_URL: databaseUrl(cluster, "app"),
		DATABASE_READER_URL: databaseUrl(cluster, "reader"),
		DATABASE_OWNER_URL: databaseUrl(cluster, "owner"),
	};
	return { cluster, addresses };
}

async function runScript(file, env) {
	const { output } = await run(tsx, [file], { env });
	return output.trim().split("\n").at(-1) || "done";
}

export const migrate = (env) => step("Migrations", () => runScript("db/migrate.ts", env));

/** The demo's data, a line for each of its parts; the log of the queue's work is not for here. */
async function fill(env) {
	await run(tsx, ["db/seed/seed.ts"], { env: { ...env, LOG_LEVEL: "warn" }, streams: true });
}

const versionOf = () => hashFiles(["db/migrations", "db/migrate.ts", "db/seed", "package-lock.json"]);

/**
 * Brings the private database to the present version and fills it when empty. The version is kept as the database's
 * comment, so that a start which has nothing to do there need not load the programs that would find that out.
 */
export async function bringUpToDate(cluster, env) {
	const version = versionOf();
	const { output } = await asAdmin(
		cluster,
		"tallygrove",
		"select shobj_description(oid, 'pg_database') from pg_database where datname = current_database()",
	);
	if (output.trim() === version) return step("Migrations and demo data", () => "up to date");
	await migrate(env);
	await step("Demo data", () => fill(env), { streams: true });
	await asAdmin(cluster, "tallygrove", `comment on database tallygrove is '${version}'`);
}

/**
 * People are known by issuer and subject. The demo's issuer is an address whose port can be taken by another program one
 * day; the demo's people then move with it.
 */
export async function followIssuer(cluster, issuer) {
	const before = readState().issuer;
	if (before && before !== issuer) {
		await asAdmin(
			cluster,
			"tallygrove",
			`update auth.person p set issuer = '${issuer}' where issuer = '${before}'
				and not exists (select from auth.person q where q.issuer = '${issuer}' and q.subject = p.subject)`,
		);
	}
	remember({ issuer });
}

/** Addresses and secret for working on the code by hand: `set -a; . .local/env; set +a`. */
export function writeEnvironmentFile(addresses) {
	const all = { ...addresses, SESSION_SECRET: localSecrets().session };
	const path = join(local, "env");
	writePrivate(
		path,
		Object.entries(all)
			.map(([name, value]) => `export ${name}=${value}\n`)
			.join(""),
	);
	return path;
}

/** Stops the database that --database-only left running. */
export async function stopDatabase() {
	const cluster = await startCluster({ name: "demo" });
	await stopCluster(cluster);
	remember({ databaseStays: false });
}
