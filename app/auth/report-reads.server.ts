import { isbot } from "isbot";
import { sql } from "kysely";
import { log } from "#app/lib/log.server.ts";
import { scopedTransaction } from "./scope.server.ts";

export type ReadKind = "page" | "pdf";

/** Counts wait so long, so that many readers at once make one short write. A server that dies takes as much with it. */
const waitMs = 5_000;
/** Reports that wait at most while the database is away; beyond them nothing is counted. */
const mostWaiting = 1_000;

const waiting = new Map<string, number>();
let timer: NodeJS.Timeout | undefined;

/**
 * Counts that a report was opened: one more on its day, and nothing of who opened it. It touches no database before its
 * page is answered, and whatever goes wrong later is told to the log alone.
 */
export function countRead(request: Request, reportId: string, kind: ReadKind = "page"): void {
	if (!isReader(request)) return;
	const key = `${reportId} ${kind}`;
	if (!waiting.has(key) && waiting.size >= mostWaiting) return;
	waiting.set(key, (waiting.get(key) ?? 0) + 1);
	timer ??= setTimeout(() => void flushReads(), waitMs).unref();
}

/** A person with a browser who asked for it: no robot, no program that names itself by nothing, nothing fetched ahead. */
export function isReader({ method, headers }: Pick<Request, "method" | "headers">): boolean {
	const agent = headers.get("user-agent");
	const ahead = /prefetch|prerender/i.test(`${headers.get("sec-purpose") ?? ""} ${headers.get("purpose") ?? ""}`);
	return method === "GET" && Boolean(agent) && !isbot(agent) && !ahead;
}

/** Writes what was counted. What could not be written is counted again with the next. */
export async function flushReads(): Promise<void> {
	clearTimeout(timer);
	timer = undefined;
	const counted = [...waiting];
	waiting.clear();
	if (counted.length === 0) return;
	try {
		await scopedTransaction({ kind: "none" }, (trx) =>
			// In one order, so that two servers never wait for each other.
			sql`insert into readership.report_read as r (report_id, read_on, kind, times)
				select split_part(key, ' ', 1)::uuid, auth.network_today(), split_part(key, ' ', 2), times
				from unnest(${counted.map(([key]) => key)}::text[], ${counted.map(([, times]) => times)}::int[]) as c (key, times)
				order by key
				on conflict (report_id, read_on, kind) do update set times = r.times + excluded.times`.execute(trx),
		);
	} catch (error) {
		for (const [key, times] of counted) waiting.set(key, (waiting.get(key) ?? 0) + times);
		log.warn({ err: error }, "reads of reports could not be counted");
	}
}
