// Finds PostgreSQL's server programs, which Debian keeps off PATH, or installs Debian's package.
import { existsSync, readdirSync } from "node:fs";
import { delimiter, join } from "node:path";
import { installDebian } from "./debian.mjs";
import { run } from "./run.mjs";
import { Stop } from "./steps.mjs";

const oldestMajor = 15;
const debianFolder = "/usr/lib/postgresql";
const needed = ["initdb", "pg_ctl", "postgres", "psql"];

/** Folders to look in. TALLYGROVE_PG_BIN names the only one, for a version kept elsewhere. */
function folders() {
	if (process.env.TALLYGROVE_PG_BIN) return [process.env.TALLYGROVE_PG_BIN];
	const versions = existsSync(debianFolder) ? readdirSync(debianFolder) : [];
	const path = (process.env.PATH ?? "").split(delimiter).filter(Boolean);
	return [...versions.map((version) => join(debianFolder, version, "bin")), ...path];
}

/** @returns every usable installation as { bin, major, version }, newest first. */
async function listPostgres() {
	const found = [];
	for (const bin of new Set(folders())) {
		if (!needed.every((program) => existsSync(join(bin, program)))) continue;
		const { output } = await run(join(bin, "postgres"), ["--version"], { mayFail: true });
		const version = /\(PostgreSQL\) (\d+)(\S*)/.exec(output);
		if (version && Number(version[1]) >= oldestMajor) {
			found.push({ bin, major: Number(version[1]), version: version[1] + version[2] });
		}
	}
	return found.toSorted((a, b) => b.major - a.major);
}

// Debian's package would make a cluster on 5432 that nobody here uses.
const noMainCluster = [
	"mkdir -p /etc/postgresql-common",
	'{ grep -qs "^ *create_main_cluster" /etc/postgresql-common/createcluster.conf || echo "create_main_cluster = false" >> /etc/postgresql-common/createcluster.conf; }',
];

/**
 * @param major the version that an existing data folder needs; any from 15 on when left out.
 * @returns { bin, major, version }
 */
export async function ensurePostgres(major) {
	const fits = (found) => major === undefined || found.major === major;
	const found = (await listPostgres()).find(fits);
	if (found) return found;
	if (process.env.TALLYGROVE_PG_BIN) {
		throw new Stop(
			`TALLYGROVE_PG_BIN is ${process.env.TALLYGROVE_PG_BIN}, which holds no PostgreSQL ${major ?? `${oldestMajor} or later`} (needed: ${needed.join(", ")}).`,
		);
	}
	const what = `PostgreSQL ${major ?? `${oldestMajor} or later`}`;
	await installDebian([major ? `postgresql-${major}` : "postgresql"], { what, before: noMainCluster });
	const installed = (await listPostgres()).find(fits);
	if (installed) return installed;
	throw new Stop(`This system's package brings no ${what}. Install one, then start again.`);
}
