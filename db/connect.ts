import { Kysely, PostgresDialect } from "kysely";
import pg from "pg";
import type { DB } from "#db/schema.ts";

// The driver gives bigint and numeric as text, so that sums would join as strings. Counts here stay far below 2^53 and
// no numeric column exists, so both become numbers; a date stays the text that was stored, without a time zone's shift.
pg.types.setTypeParser(pg.types.builtins.INT8, Number);
pg.types.setTypeParser(pg.types.builtins.NUMERIC, Number);
pg.types.setTypeParser(pg.types.builtins.DATE, (text: string) => text);

type ConnectOptions = {
	max?: number;
	name?: string;
	/** What to throw instead when no connection can be had. */
	away?: (error: unknown) => unknown;
};

/** A pool of connections for one role, as a typed Kysely client. The caller ends it with `destroy()`. */
export function connect(connectionString: string, options: ConnectOptions = {}): Kysely<DB> {
	const pool = new pg.Pool({
		connectionString,
		max: options.max ?? 10,
		application_name: options.name ?? "tallygrove",
		// Compiling a short query took up to ten times as long as running it: row-level security makes each look dear.
		options: "-c jit=off",
		// Waiting for a turn counts, too: a mail with a link brings many growers in one minute. A database that refuses says so at once.
		connectionTimeoutMillis: 12_000,
	});
	// A server that went away is reported by the query that meets it; an idle connection's error must not end the process.
	pool.on("error", () => {});
	const taken = () =>
		pool.connect().catch((error: unknown) => {
			throw options.away?.(error) ?? error;
		});
	return new Kysely<DB>({ dialect: new PostgresDialect({ pool: { connect: taken, end: () => pool.end() } }) });
}
