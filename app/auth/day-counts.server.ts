import { isbot } from "isbot";
import { log } from "#app/lib/log.server.ts";
import { scopedTransaction, type Trx } from "./scope.server.ts";

/** Counts wait so long, so that many readers at once make one short write. A server that dies takes as much with it. */
const waitMs = 5_000;
/** Things that wait at most while the database is away; beyond them nothing is counted. */
const mostWaiting = 1_000;

/** What was counted of each key. Keys come in one order, so that two servers never wait for each other. */
export type Counted = { keys: string[]; times: number[] };

/**
 * Counts by the day how often something was read or taken: one more, and nothing of who it was. It touches no database before
 * the answer is given, and whatever goes wrong later is told to the log alone.
 * @param write adds what was counted to today's numbers.
 */
export function countByDay(what: string, write: (trx: Trx, counted: Counted) => Promise<unknown>) {
	const waiting = new Map<string, number>();
	let timer: NodeJS.Timeout | undefined;

	function count(key: string): void {
		if (!waiting.has(key) && waiting.size >= mostWaiting) return;
		waiting.set(key, (waiting.get(key) ?? 0) + 1);
		timer ??= setTimeout(() => void flush(), waitMs).unref();
	}
	/** Writes what was counted. What could not be written is counted again with the next. */
	async function flush(): Promise<void> {
		clearTimeout(timer);
		timer = undefined;
		const counted = [...waiting].toSorted(([a], [b]) => (a < b ? -1 : 1));
		waiting.clear();
		if (counted.length === 0) return;
		const [keys, times] = [counted.map(([key]) => key), counted.map(([, number]) => number)];
		try {
			await scopedTransaction({ kind: "none" }, (trx) => write(trx, { keys, times }));
		} catch (error) {
			for (const [key, number] of counted) waiting.set(key, (waiting.get(key) ?? 0) + number);
			log.warn({ err: error }, `${what} could not be counted`);
		}
	}
	return { count, flush };
}

/** A person with a browser who asked for it: no robot, no program that names itself by nothing, nothing fetched ahead. */
export function isReader({ method, headers }: Pick<Request, "method" | "headers">): boolean {
	const agent = headers.get("user-agent");
	const ahead = /prefetch|prerender/i.test(`${headers.get("sec-purpose") ?? ""} ${headers.get("purpose") ?? ""}`);
	return method === "GET" && Boolean(agent) && !isbot(agent) && !ahead;
}
