import type { Trx } from "#app/auth/scope.server.ts";
import type { ReleaseRules } from "#app/release/draft.ts";
import { findRules } from "#app/release/network-rules.server.ts";
import { networkRules } from "./network-rules.ts";

/** The settings that hold for a draft made now. */
export async function readNetworkRules(trx: Trx): Promise<ReleaseRules> {
	return (await findRules(trx)) ?? networkRules;
}
