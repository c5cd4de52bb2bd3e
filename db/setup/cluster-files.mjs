// Where a cluster lies on disk, and its settings.
import {
	chownSync,
	existsSync,
	lstatSync,
	mkdirSync,
	readdirSync,
	readFileSync,
	renameSync,
	rmSync,
	writeFileSync,
} from "node:fs";
import { basename, dirname, join } from "node:path";
import { checkoutKey, isRoot, local, readState, remember, randomSecret } from "./local.mjs";
import { run } from "./run.mjs";
import { Stop } from "./steps.mjs";

/** PostgreSQL refuses to run as root; Debian's package brings a user for it. */
function unprivilegedAccount() {
	if (!isRoot) return undefined;
	const users = readFileSync("/etc/passwd", "utf8")
		.split("\n")
		.map((line) => line.split(":"));
	const user = users.find(([name]) => name === "postgres") ?? users.find(([name]) => name === "nobody");
	if (!user) throw new Stop("PostgreSQL does not run as root, and this machine has no user named postgres for it.");
	return { uid: Number(user[2]), gid: Number(user[3]) };
}

/** /var/tmp is open to all, so a folder found there may be a stranger's. */
function makeOwnFolder(path, mode) {
	mkdirSync(path, { recursive: true, mode });
	const found = lstatSync(path);
	if (!found.isDirectory() || found.uid !== process.getuid()) {
		throw new Stop(`${path} belongs to somebody else. Remove it, then start again.`);
	}
}

/**
 * A data folder of root's outlives the checkout. When .local is new, the folder is an earlier checkout's at the same
 * path: it is set aside (once), not reused, as its tables may be of another version.
 */
async function setAsideForeign(base, data, account) {
	const mark = join(base, "checkout");
	const known = readState().checkout;
	if (known && existsSync(mark) && readFileSync(mark, "utf8") === known) return;
	if (existsSync(join(data, "PG_VERSION"))) {
		await endStray(data, account);
		rmSync(`${base}.before`, { recursive: true, force: true });
		renameSync(base, `${base}.before`);
		makeOwnFolder(base, 0o711);
	}
	const checkout = randomSecret();
	writeFileSync(mark, checkout, { mode: 0o600 });
	remember({ checkout });
}

/** Stops a server that nobody looks after any more, by the process id it wrote down, if that is still it. */
export async function endStray(data, account) {
	const pidFile = join(data, "postmaster.pid");
	if (!existsSync(pidFile)) return;
	const pid = Number(readFileSync(pidFile, "utf8").split("\n")[0]);
	const isIt = () => existsSync(`/proc/${pid}/cmdline`) && readFileSync(`/proc/${pid}/cmdline`, "utf8").includes(data);
	if (!(pid > 1) || !isIt()) return;
	for (const [signal, tries] of [
		["INT", 100],
		["QUIT", 50],
	]) {
		await run("/bin/kill", [`-${signal}`, `${pid}`], { account, mayFail: true });
		for (let i = 0; i < tries && isIt(); i++) await new Promise((resolve) => setTimeout(resolve, 100));
	}
}

/** Removes throw-away clusters whose starter was killed together with its guard. */
async function sweep(parent, prefix, account) {
	for (const name of existsSync(parent) ? readdirSync(parent) : []) {
		const pid = name.startsWith(prefix) ? Number(name.slice(prefix.length)) : Number.NaN;
		if (!Number.isInteger(pid) || pid === process.pid || existsSync(`/proc/${pid}`)) continue;
		await endStray(join(parent, name, "data"), account);
		rmSync(join(parent, name), { recursive: true, force: true });
	}
}

/** Makes the folders of a cluster: base (ours), and in it data, sockets and log, which belong to its account. */
export async function makeFolders(name, throwaway) {
	const account = unprivilegedAccount();
	const stem = isRoot ? join("/var/tmp", `tallygrove-${checkoutKey}-${name}`) : join(local, `postgres-${name}`);
	if (throwaway) await sweep(dirname(stem), `${basename(stem)}-`, account);
	const base = throwaway ? `${stem}-${process.pid}` : stem;
	if (throwaway) rmSync(base, { recursive: true, force: true });
	makeOwnFolder(base, isRoot ? 0o711 : 0o700);
	const data = join(base, "data");
	if (isRoot && !throwaway) await setAsideForeign(base, data, account);

	const give = (path) => account && chownSync(path, account.uid, account.gid);
	for (const folder of [data, join(base, "socket"), join(base, "log")]) {
		if (existsSync(folder)) continue;
		mkdirSync(folder, { mode: 0o700 });
		give(folder);
	}
	return { base, data, account, give, socket: join(base, "socket"), log: join(base, "log", "postgresql.log") };
}

const quoted = (text) => `'${text.replaceAll("'", "''")}'`;

/** Written anew at each start. A socket's path may hold 107 bytes; without one there is still 127.0.0.1. */
export function settingsText({ port, socket, throwaway }) {
	const settings = {
		listen_addresses: quoted("127.0.0.1"),
		port,
		unix_socket_directories: quoted(Buffer.byteLength(socket) < 85 ? socket : ""),
		password_encryption: quoted("scram-sha-256"),
		timezone: quoted("UTC"),
		log_timezone: quoted("UTC"),
		max_connections: throwaway ? 200 : 100,
		// As every connection of the product has it (db/connect.ts), for those that tests and set-up open by themselves.
		jit: "off",
		...(throwaway && { fsync: "off", synchronous_commit: "off", full_page_writes: "off" }),
	};
	return Object.entries(settings)
		.map(([name, value]) => `${name} = ${value}\n`)
		.join("");
}

/** Settings lie in the base folder, which is not the account's, and postgresql.conf reads them last. */
export function writeSettings({ base, data }, text) {
	const path = join(base, "tallygrove.conf");
	writeFileSync(path, text, { mode: 0o644 });
	const main = join(data, "postgresql.conf");
	const line = `include ${quoted(path)}\n`;
	if (!readFileSync(main, "utf8").endsWith(line)) writeFileSync(main, line, { flag: "a" });
}
