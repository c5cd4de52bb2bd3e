// What belongs to this checkout alone: folders, remembered ports, random secrets. All of it lies in .local,
// except a cluster started by root, which cannot: its own user may not be allowed into the checkout.
import { createHash, randomBytes } from "node:crypto";
import { chmodSync, existsSync, mkdirSync, readFileSync, realpathSync, renameSync, writeFileSync } from "node:fs";
import { join, resolve } from "node:path";
import { fileURLToPath } from "node:url";

export const root = realpathSync(resolve(fileURLToPath(import.meta.url), "../../.."));
export const local = join(root, ".local");
export const isRoot = process.getuid?.() === 0;

/** Short name for this checkout, the same on each start. */
export const checkoutKey = createHash("sha256").update(root).digest("hex").slice(0, 12);

export function makeLocal() {
	mkdirSync(join(local, "log"), { recursive: true, mode: 0o700 });
	chmodSync(local, 0o700);
}

/** Writes a file that only its owner may read, whole or not at all. */
export function writePrivate(path, text) {
	writeFileSync(`${path}.new`, text, { mode: 0o600 });
	renameSync(`${path}.new`, path);
}

export function readJson(path, absent = {}) {
	try {
		return JSON.parse(readFileSync(path, "utf8"));
	} catch {
		return absent; // missing, or cut short by a full disk: both are begun anew
	}
}

const statePath = join(local, "state.json");

export const readState = () => readJson(statePath);

export function remember(changes) {
	writePrivate(statePath, `${JSON.stringify({ ...readState(), ...changes }, undefined, "\t")}\n`);
}

export const randomSecret = () => randomBytes(32).toString("hex");

/** Passwords of the cluster's roles. */
export const randomPasswords = () => ({
	admin: randomSecret(),
	owner: randomSecret(),
	app: randomSecret(),
	reader: randomSecret(),
});

/** Random for each checkout, made at the first start. */
export function localSecrets() {
	const path = join(local, "secrets.json");
	const kept = readJson(path);
	const secrets = { ...randomPasswords(), session: randomSecret(), client: randomSecret(), ...kept };
	if (!existsSync(path) || Object.keys(kept).length < Object.keys(secrets).length) {
		writePrivate(path, `${JSON.stringify(secrets, undefined, "\t")}\n`);
	}
	return secrets;
}
