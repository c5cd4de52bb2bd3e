// A PostgreSQL cluster of this checkout's own, which listens on 127.0.0.1 only.
import { existsSync, readFileSync, rmSync, statSync } from "node:fs";
import { join } from "node:path";
import { makeFolders, settingsText, writeSettings } from "./cluster-files.mjs";
import { startGuard } from "./cluster-guard.mjs";
import { local, localSecrets, randomPasswords, readState, remember, writePrivate } from "./local.mjs";
import { freePort, isFree } from "./ports.mjs";
import { ensurePostgres } from "./postgres.mjs";
import { run } from "./run.mjs";
import { Stop } from "./steps.mjs";

export { ensurePostgres } from "./postgres.mjs";

/** The surroundings of PostgreSQL's programs: none of the caller's PG… variables, which would lead them elsewhere. */
export const postgresEnvironment = (more = {}) => ({ PATH: process.env.PATH, LC_ALL: "C.UTF-8", HOME: "/", ...more });

const inCluster = (cluster, program, args, options = {}) =>
	run(join(cluster.bin, program), args, { account: cluster.account, env: postgresEnvironment(), ...options });

/** Runs SQL as the superuser; psql is the only client that is there before npm's packages are. */
export const asAdmin = (cluster, database, sql) =>
	run(
		join(cluster.bin, "psql"),
		[
			"-X",
			"-q",
			"-A",
			"-t",
			"-v",
			"ON_ERROR_STOP=1",
			"-h",
			"127.0.0.1",
			"-p",
			`${cluster.port}`,
			"-U",
			"postgres",
			"-d",
			database,
		],
		{ input: sql, env: postgresEnvironment({ PGPASSWORD: cluster.passwords.admin }) },
	);

async function isRunning(cluster) {
	const { code } = await inCluster(cluster, "pg_ctl", ["status", "-D", cluster.data], { mayFail: true });
	return code === 0;
}

async function initialize(cluster) {
	const passwordFile = join(cluster.secretFolder, "password");
	writePrivate(passwordFile, cluster.passwords.admin);
	cluster.give(passwordFile);
	try {
		const where = ["-D", cluster.data, "-U", "postgres", "--pwfile", passwordFile];
		const how = ["--auth=scram-sha-256", "--encoding=UTF8", "--locale=C.UTF-8"];
		await inCluster(cluster, "initdb", [...where, ...how, cluster.throwaway ? "--no-sync" : "--data-checksums"]);
	} catch (error) {
		rmSync(cluster.data, { recursive: true, force: true }); // half a cluster would look like a whole one next time
		throw error;
	} finally {
		rmSync(passwordFile, { force: true });
	}
}

async function launch(cluster) {
	if (existsSync(cluster.log) && statSync(cluster.log).size > 10_000_000) rmSync(cluster.log);
	const args = ["start", "-D", cluster.data, "-l", cluster.log, "-w", "-t", "60", "-s"];
	for (let attempt = 1; ; attempt++) {
		writeSettings(cluster, settingsText(cluster));
		const { code, output } = await inCluster(cluster, "pg_ctl", args, { mayFail: true });
		if (code === 0) return;
		// After a kill -9 the old server's processes need a moment to leave its memory.
		if (attempt === 5) {
			const log = existsSync(cluster.log)
				? readFileSync(cluster.log, "utf8").trim().split("\n").slice(-12).join("\n")
				: "";
			throw new Stop(`PostgreSQL did not start. Its log (${cluster.log}) ends:\n${log}\n${output}`);
		}
		await new Promise((resolve) => setTimeout(resolve, 1000));
		if (!(await isFree(cluster.port))) await choosePort(cluster, true);
	}
}

async function choosePort(cluster, anew = false) {
	const known = cluster.throwaway || anew ? undefined : readState().databasePort;
	cluster.port = known && (await isFree(known)) ? known : await freePort();
	if (!cluster.throwaway) remember({ databasePort: cluster.port });
}

const portOfRunning = (cluster) => Number(readFileSync(join(cluster.data, "postmaster.pid"), "utf8").split("\n")[3]);

/**
 * Starts the cluster `name`, made first when absent; one that still runs is taken over.
 * @param options.throwaway new, empty, without any care for durability, and removed at its end (tests).
 * @param options.guarded stopped even when this process is killed; false leaves it running for good.
 * @returns { bin, data, port, passwords, account, wasRunning, guard }
 */
export async function startCluster({ name = "demo", throwaway = false, guarded = true } = {}) {
	const folders = await makeFolders(name, throwaway);
	const dataVersion = join(folders.data, "PG_VERSION");
	const made = existsSync(dataVersion);
	const postgres = await ensurePostgres(made ? Number(readFileSync(dataVersion, "utf8")) : undefined);
	const passwords = throwaway ? randomPasswords() : localSecrets();
	const cluster = { ...folders, ...postgres, throwaway, passwords, secretFolder: local, wasRunning: false };
	if (folders.account) cluster.secretFolder = folders.base; // the cluster's user may not enter the checkout
	if (guarded) cluster.guard = startGuard(cluster);
	try {
		if (!made) await initialize(cluster);
		if (made && (await isRunning(cluster))) {
			cluster.wasRunning = true;
			cluster.port = portOfRunning(cluster);
		} else {
			await choosePort(cluster);
			await launch(cluster);
		}
		return cluster;
	} catch (error) {
		await stopCluster(cluster);
		throw error;
	}
}

/** Calls `whenGone` once the cluster's server is no more, unless it was stopped in order. */
export function watchCluster(cluster, whenGone) {
	const pid = Number(readFileSync(join(cluster.data, "postmaster.pid"), "utf8").split("\n")[0]);
	cluster.watch = setInterval(() => {
		try {
			process.kill(pid, 0);
		} catch (error) {
			if (error.code === "EPERM") return; // there, but another user's
			clearInterval(cluster.watch);
			whenGone();
		}
	}, 1000).unref();
}

/** Stops a cluster; sessions in it are ended, what they had committed stays. */
export async function stopCluster(cluster) {
	clearInterval(cluster.watch);
	const stop = (mode) =>
		inCluster(cluster, "pg_ctl", ["stop", "-D", cluster.data, "-m", mode, "-w", "-t", "30", "-s"], { mayFail: true });
	if (existsSync(cluster.data) && (await isRunning(cluster)) && (await stop("fast")).code !== 0)
		await stop("immediate");
	if (cluster.throwaway) rmSync(cluster.base, { recursive: true, force: true });
	cluster.guard?.dismiss();
}
