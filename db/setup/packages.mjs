// npm's packages, installed only when the lock file changed.
import { createHash } from "node:crypto";
import { existsSync, readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { readJson, root } from "./local.mjs";
import { run } from "./run.mjs";
import { Stop } from "./steps.mjs";

const lockFile = join(root, "package-lock.json");
const stamp = join(root, "node_modules/.tallygrove-lock");

export function checkNode() {
	const [major, minor] = process.versions.node.split(".").map(Number);
	if (major > 20 || (major === 20 && minor >= 19)) return;
	throw new Stop(`Node.js 20.19 or later is needed; this is ${process.versions.node}.`);
}

/** Whether npm's own record says that what the lock file names is there, as after an npm ci by hand. */
function isInstalled() {
	const wanted = readJson(lockFile).packages ?? {};
	const present = readJson(join(root, "node_modules/.package-lock.json")).packages;
	if (!present) return false;
	return Object.entries(wanted).every(([path, { version, optional, link, integrity }]) => {
		if (path === "" || link) return true;
		const found = present[path];
		if (!found) return optional === true; // made for another system
		return found.version === version && (!found.integrity || found.integrity === integrity);
	});
}

export async function ensurePackages() {
	const hash = createHash("sha256").update(readFileSync(lockFile)).digest("hex");
	if (existsSync(stamp) && readFileSync(stamp, "utf8") === hash) return "up to date";
	const already = !existsSync(stamp) && isInstalled();
	// The build's tools are development packages, which npm leaves out when NODE_ENV is production.
	if (!already) await run("npm", ["ci", "--include=dev", "--no-progress", "--no-audit", "--no-fund"]);
	writeFileSync(stamp, hash);
	return already ? "already there" : "installed";
}
