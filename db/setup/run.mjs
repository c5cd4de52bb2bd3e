// Runs a program to its end. Long-lived ones are started by services.mjs.
import { spawn } from "node:child_process";
import { root } from "./local.mjs";
import { Stop } from "./steps.mjs";

const running = new Set();

/**
 * @param options.account uid and gid to run as; the working folder is then /, which everybody may enter.
 * @param options.input text for standard input.
 * @param options.streams lets the output through instead of collecting it.
 * @param options.mayFail gives the exit code back instead of throwing.
 * @param options.sweeps ends what the program left behind in its group.
 * @param options.unbroken a stop waits for it (a package manager cut short leaves work for its owner).
 * @returns code and collected output.
 */
export function run(command, args, options = {}) {
	const {
		account,
		input,
		streams = false,
		mayFail = false,
		sweeps = false,
		unbroken = false,
		env = process.env,
		cwd,
	} = options;
	return new Promise((resolve, reject) => {
		const child = spawn(command, args, {
			...account,
			cwd: cwd ?? (account ? "/" : root),
			env,
			detached: true, // in a group of its own, which a Ctrl-C does not reach and endRunning ends whole
			stdio: [input === undefined ? "ignore" : "pipe", streams ? "inherit" : "pipe", streams ? "inherit" : "pipe"],
		});
		if (!unbroken) running.add(child);
		let output = "";
		for (const stream of [child.stdout, child.stderr]) {
			stream?.setEncoding("utf8").on("data", (text) => (output = (output + text).slice(-200_000)));
		}
		child.stdin?.on("error", () => {}); // it ended before reading all; its exit code tells why
		child.stdin?.end(input);
		child.on("error", (error) => {
			running.delete(child);
			reject(new Stop(`Could not run ${command}: ${error.message}`));
		});
		let ended = false;
		const end = (code, signal) => {
			if (ended) return;
			ended = true;
			running.delete(child);
			if (sweeps) endGroup(child.pid, "SIGKILL");
			if (code === 0 || mayFail) return resolve({ code: code ?? 1, output });
			const tail = output.trim().split("\n").slice(-25).join("\n");
			reject(new Stop(`${[command, ...args].join(" ")} ended with ${signal ?? `code ${code}`}\n${tail}`));
		};
		child.on("close", end);
		// A program may leave another behind that holds the pipes open, as pg_ctl can: do not wait for that one.
		child.on("exit", (code, signal) => setTimeout(end, 1000, code, signal).unref());
	});
}

/** Ends what is still running, with all it started, for a stop in the middle. */
export function endRunning() {
	for (const child of running) endGroup(child.pid, "SIGTERM");
}

export function endGroup(pid, signal) {
	try {
		process.kill(-pid, signal);
	} catch {
		// nothing of it is left
	}
}
