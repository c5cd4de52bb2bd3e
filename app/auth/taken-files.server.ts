import { sql } from "kysely";
import { countByDay, isReader } from "./day-counts.server.ts";

const taken = countByDay("taken files", (trx, { keys, times }) =>
	sql`insert into readership.file_taken as t (release_id, file_name, taken_on, times)
		select split_part(key, ' ', 1)::uuid, split_part(key, ' ', 2), auth.network_today(), times
		from unnest(${keys}::text[], ${times}::int[]) as c (key, times)
		on conflict (release_id, file_name, taken_on) do update set times = t.times + excluded.times`.execute(trx),
);

/**
 * Whether a file was given out with this answer. Given out is the whole of it: who looks first with HEAD, asks whether a copy
 * is still the same, or goes on with the rest after a broken line, takes it once.
 */
export const wasTaken = ({ method }: Request, { status }: Response): boolean => method === "GET" && status === 200;

/** Counts that somebody took a file of a release from the open pages, unless a robot or a program did. */
export function countTaken(request: Request, response: Response, releaseId: string, fileName: string): void {
	if (wasTaken(request, response) && isReader(request)) taken.count(`${releaseId} ${fileName}`);
}

export const flushTaken = taken.flush;
