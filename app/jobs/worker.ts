import { Logger, run } from "graphile-worker";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";
import {
	checkUnchecked,
	crontab,
	queueMissingFiles,
	queueMissingPdfs,
	setReminderAlarms,
	tasks,
} from "./tasks.server.ts";

// The worker is a process of its own, so that a slow audit never holds up a page. Any number may run beside each other.
const quiet = new Logger((scope) => (level, message) => {
	if (level === "error" || level === "warning") log[level === "error" ? "error" : "warn"](scope, message);
});

const runner = await run({
	connectionString: env().DATABASE_URL,
	concurrency: 4,
	pollInterval: 2_000,
	taskList: tasks,
	crontab,
	logger: quiet,
	noHandleSignals: false,
});
await setReminderAlarms();
await queueMissingFiles();
await queueMissingPdfs();
await checkUnchecked();
log.info("worker ready");
process.on("disconnect", () => void runner.stop());
await runner.promise;
process.exit(0);
