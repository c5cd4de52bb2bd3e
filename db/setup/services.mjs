// Long-lived programs beside the set-up: started, watched, stopped.
import { spawn } from "node:child_process";
import { createWriteStream } from "node:fs";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { atEnd, end, isEnding } from "./end.mjs";
import { local, root } from "./local.mjs";
import { endGroup } from "./run.mjs";
import { noteService } from "./running.mjs";
import { Stop } from "./steps.mjs";

const leaveWithParent = pathToFileURL(join(root, "db/setup/leave-with-parent.mjs")).href;
const pause = (milliseconds) => new Promise((resolve) => setTimeout(resolve, milliseconds));

/** Errors go to the terminal with the service's name before them; everything goes to its log. */
function keepOutput(child, name, path, shows) {
	const log = createWriteStream(path, { mode: 0o600 });
	const latest = [];
	const follow = (stream, visible) =>
		stream.setEncoding("utf8").on("data", (text) => {
			log.write(text);
			const lines = text.split("\n").filter((line) => line.trim() !== "");
			latest.push(...lines);
			latest.splice(0, latest.length - 15);
			if (visible && !isEnding()) for (const line of lines) console.log(`[${name}] ${line}`);
		});
	follow(child.stdout, shows);
	follow(child.stderr, true);
	return latest;
}

async function stopService(child) {
	const gone = () => child.exitCode !== null || child.signalCode !== null;
	endGroup(child.pid, "SIGTERM");
	for (let i = 0; i < 100 && !gone(); i++) await pause(50);
	endGroup(child.pid, "SIGKILL");
}

/**
 * Starts a Node program that is to run until the end. When it ends before, everything ends.
 * @param options.shows whether its usual output is shown too.
 */
export function startService(name, args, env, { shows = false } = {}) {
	// A group of its own: a Ctrl-C in the terminal reaches only the start command, which then stops all in order.
	const child = spawn(process.execPath, ["--import", leaveWithParent, ...args], {
		cwd: root,
		env,
		detached: true,
		stdio: ["ignore", "pipe", "pipe", "ipc"],
	});
	child.channel?.unref();
	const log = join(local, "log", `${name.replaceAll(" ", "-")}.log`);
	const service = { name, child, log, latest: keepOutput(child, name, log, shows) };
	if (child.pid) noteService(name, child.pid);
	atEnd(() => stopService(child));
	child.on("error", (error) => service.latest.push(error.message));
	child.on("exit", (code, signal) => {
		service.ended = signal ?? `code ${code}`;
		if (isEnding()) return;
		setTimeout(() => {
			if (isEnding()) return;
			console.error(`\nThe ${name} ended by itself (${service.ended}), so everything stops. Its log: ${service.log}`);
			end(1);
		}, 200); // its last words are still on their way
	});
	return service;
}

/** Waits until an address answers 200; the service's end, or a minute without success, is a Stop. */
export async function waitFor(service, address, { minutes = 1 } = {}) {
	let last = "no answer";
	for (const start = Date.now(); Date.now() - start < minutes * 60_000; await pause(100)) {
		if (service.ended) await new Promise(() => {}); // its end ends everything
		try {
			const response = await fetch(address, { signal: AbortSignal.timeout(5000) });
			if (response.status === 200) return;
			last = `${response.status} ${(await response.text()).slice(0, 500)}`;
		} catch (error) {
			last = error.cause?.code ?? error.message;
		}
	}
	throw new Stop(
		`The ${service.name} is not ready: ${address} gave ${last}. Its last words:\n${service.latest.join("\n")}`,
	);
}
