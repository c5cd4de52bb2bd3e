import { sql } from "kysely";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { checkMailServer } from "#app/mail/transport.server.ts";

type Part = { ok: boolean; detail?: Record<string, number> };
export type Health = { ok: boolean; database: Part; queue: Part; mail: Part };

/** How long a job may wait before the queue counts as stuck: a worker polls every two seconds. */
const stuckAfterSeconds = 120;
const patience = 3_000;

/** Asks each thing that the product cannot do without, side by side, each within a few seconds. */
export async function checkHealth(): Promise<Health> {
	const [database, queue, mail] = await Promise.all([
		attempt(async () => {
			await scopedTransaction({ kind: "none" }, (trx) => sql`select 1`.execute(trx));
			return undefined;
		}),
		attempt(queueState),
		attempt(async () => {
			await checkMailServer();
			return undefined;
		}),
	]);
	return { ok: database.ok && queue.ok && mail.ok, database, queue, mail };
}

async function queueState(): Promise<Record<string, number>> {
	const { rows } = await scopedTransaction({ kind: "none" }, (trx) =>
		sql<{ waiting: number; failed: number; oldest: number }>`
			select (count(*) filter (where attempts < max_attempts))::int as waiting,
				(count(*) filter (where attempts >= max_attempts))::int as failed,
				coalesce(extract(epoch from now() - min(run_at) filter
					(where run_at <= now() and attempts = 0 and locked_at is null)), 0)::int as oldest
			from graphile_worker.jobs`.execute(trx),
	);
	const state = rows[0] ?? { waiting: 0, failed: 0, oldest: 0 };
	if (state.oldest > stuckAfterSeconds) throw new Error(`the oldest job has waited ${state.oldest} seconds`);
	return { waiting: state.waiting, failed: state.failed, oldestWaitingSeconds: state.oldest };
}

async function attempt(ask: () => Promise<Record<string, number> | undefined>): Promise<Part> {
	let timer: NodeJS.Timeout | undefined;
	const late = new Promise<never>((_, reject) => {
		timer = setTimeout(() => reject(new Error("no answer in time")), patience);
	});
	try {
		const detail = await Promise.race([ask(), late]);
		return detail ? { ok: true, detail } : { ok: true };
	} catch {
		return { ok: false };
	} finally {
		clearTimeout(timer);
	}
}
