import { sql } from "kysely";
import { countByDay, isReader } from "./day-counts.server.ts";

export type ReadKind = "page" | "pdf";

const reads = countByDay("reads of reports", (trx, { keys, times }) =>
	sql`insert into readership.report_read as r (report_id, read_on, kind, times)
		select split_part(key, ' ', 1)::uuid, auth.network_today(), split_part(key, ' ', 2), times
		from unnest(${keys}::text[], ${times}::int[]) as c (key, times)
		on conflict (report_id, read_on, kind) do update set times = r.times + excluded.times`.execute(trx),
);

/** Counts that a report was opened, unless by a robot. */
export function countRead(request: Request, reportId: string, kind: ReadKind = "page"): void {
	if (isReader(request)) reads.count(`${reportId} ${kind}`);
}

export const flushReads = reads.flush;
