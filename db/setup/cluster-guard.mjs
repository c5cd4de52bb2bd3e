// Stops a cluster when the process that started it is gone, be it by kill -9. Run as a program, it is that watcher.
import { spawn } from "node:child_process";
import { rmSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";

const self = fileURLToPath(import.meta.url);

/** @returns { dismiss } to call once the cluster is stopped or is meant to stay. */
export function startGuard({ bin, data, account, base, throwaway }) {
	const order = JSON.stringify({ pgCtl: join(bin, "pg_ctl"), data, account, remove: throwaway ? base : undefined });
	// Detached: a Ctrl-C in the terminal goes to all of the foreground, and must not take the guard first.
	const watcher = spawn(process.execPath, [self, order], {
		cwd: "/",
		detached: true,
		stdio: ["ignore", "ignore", "ignore", "ipc"],
	});
	watcher.on("error", () => {});
	watcher.unref();
	watcher.channel?.unref();
	return { dismiss: () => watcher.connected && watcher.send("dismissed", () => watcher.disconnect()) };
}

function watch({ pgCtl, data, account, remove }) {
	let dismissed = false;
	for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"]) process.on(signal, () => {});
	process.on("message", () => (dismissed = true));
	process.on("disconnect", () => {
		if (dismissed) return;
		const stop = spawn(pgCtl, ["stop", "-D", data, "-m", "fast", "-w", "-t", "30", "-s"], {
			...account,
			stdio: "ignore",
		});
		stop.on("close", () => remove && rmSync(remove, { recursive: true, force: true }));
	});
}

if (process.argv[1] === self) watch(JSON.parse(process.argv[2]));
