import { sql } from "kysely";
import type { Trx } from "./scope.server.ts";

export type NetworkClock = { timeZone: string; /** `2026-12-24` */ today: string };

/** The clock that all of the network goes by: that of most of its states. */
export async function readNetworkClock(trx: Trx): Promise<NetworkClock> {
	const { rows } = await sql<NetworkClock>`select auth.network_time_zone() as "timeZone",
		auth.network_today()::text as today`.execute(trx);
	return rows[0]!;
}
