// A note of what runs for this checkout, so that a second start finds it, or ends what a killed one left behind.
import { readFileSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { local, readJson, writePrivate } from "./local.mjs";
import { endGroup } from "./run.mjs";
import { Stop } from "./steps.mjs";

const path = join(local, "running.json");
let note;

/** When a process started, in ticks since the machine did: together with its id it names one process for good. */
function startOf(pid) {
	try {
		const stat = readFileSync(`/proc/${pid}/stat`, "utf8");
		const fields = stat.slice(stat.lastIndexOf(")") + 2).split(" ");
		return fields[0] === "Z" ? undefined : fields[19];
	} catch {
		return undefined;
	}
}

const identify = (pid) => ({ pid, start: startOf(pid) });
const isAlive = (known) => known?.start !== undefined && startOf(known.pid) === known.start;

async function endLeftover(service) {
	for (const signal of ["SIGTERM", "SIGKILL"]) {
		if (!isAlive(service)) return;
		endGroup(service.pid, signal);
		for (let i = 0; i < 50 && isAlive(service); i++) await new Promise((resolve) => setTimeout(resolve, 100));
	}
}

/**
 * Notes this start. @throws Stop with the address when another runs already.
 * @returns how many services of a killed start had to be ended first.
 */
export async function claim(address) {
	const mine = { ...identify(process.pid), address, services: [] };
	for (let attempt = 0; attempt < 2; attempt++) {
		const before = readJson(path, undefined);
		if (before && before.pid !== process.pid && isAlive(before)) {
			throw new Stop(`Tallygrove already runs for this checkout, at ${before.address} (process ${before.pid}).`);
		}
		const leftovers = (before?.services ?? []).filter(isAlive);
		for (const service of leftovers) await endLeftover(service);
		if (before) rmSync(path, { force: true });
		try {
			writeFileSync(path, JSON.stringify(mine), { flag: "wx", mode: 0o600 });
			note = mine;
			return leftovers.length;
		} catch (error) {
			if (error.code !== "EEXIST") throw error; // another start came first: look again
			if (!readJson(path, undefined)) rmSync(path, { force: true });
		}
	}
	throw new Stop("Another start of this checkout is just beginning.");
}

export function noteService(name, pid) {
	if (!note) return;
	note.services.push({ name, ...identify(pid) });
	writePrivate(path, JSON.stringify(note));
}

export function release() {
	if (note) rmSync(path, { force: true });
}
