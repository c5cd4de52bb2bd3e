import { Logger, runOnce, type TaskList } from "graphile-worker";
import { afterAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { queueBatch, queueJob } from "#app/jobs/queue.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { useDatabase } from "./surveys-fixture.ts";

const database = await createTestDatabase();
useDatabase(database);
afterAll(() => database.drop());

function queueMany(n: number, subject: string): Promise<void> {
	const ids = Array.from({ length: n }, (_, at) => `${subject} ${at}`);
	const jobs = ids.map((mailingId) => ({ payload: { mailingId }, jobKey: mailingId }));
	return scopedTransaction({ kind: "network" }, (trx) => queueBatch(trx, "send_mail", jobs));
}

test("a few mails wait for one turn of the many queued before them, and what is queued singly for none", async () => {
	await queueMany(120, "thanks");
	await queueMany(3, "change");
	await scopedTransaction({ kind: "network" }, (trx) => queueJob(trx, "send_mail", { mailingId: "receipt 0" }));

	const done: string[] = [];
	const taskList: TaskList = { send_mail: (payload) => void done.push((payload as { mailingId: string }).mailingId) };
	await runOnce({ connectionString: database.appUrl, concurrency: 1, taskList, logger: new Logger(() => () => {}) });
	const runs: [string, number][] = [];
	for (const [subject] of done.map((one) => one.split(" "))) {
		const last = runs.at(-1);
		if (last && last[0] === subject) last[1]++;
		else runs.push([subject!, 1]);
	}
	expect(runs).toEqual([
		["receipt", 1],
		["thanks", 50],
		["change", 3],
		["thanks", 70],
	]);
});
