import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { ReleaseRules } from "./draft.ts";

export type RulesChange = { networkRulesId: number; rules: ReleaseRules; setBy: string; setAt: Date };

/** The settings that hold, or undefined where nobody has ever changed any. */
export async function findRules(trx: Trx): Promise<ReleaseRules | undefined> {
	const row = await trx
		.selectFrom("directory.network_rules")
		.select("rules")
		.orderBy("network_rules_id", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && ReleaseRules.parse(row.rules);
}

/** Every change of the settings, the latest first. */
export async function listRulesChanges(trx: Trx, _viewer: Coordinator): Promise<RulesChange[]> {
	const rows = await trx
		.selectFrom("directory.network_rules as r")
		.innerJoin("auth.person as p", "p.person_id", "r.set_by")
		.select(["r.network_rules_id", "r.rules", "r.set_at", "p.display_name"])
		.orderBy("r.network_rules_id", "desc")
		.limit(100)
		.execute();
	return rows.map((row) => ({
		networkRulesId: row.network_rules_id,
		rules: ReleaseRules.parse(row.rules),
		setBy: row.display_name,
		setAt: row.set_at,
	}));
}

/** Sets the network's settings for drafts to come. Drafts and releases keep those that they were made with. */
export async function saveRules(trx: Trx, viewer: Coordinator, rules: ReleaseRules): Promise<number> {
	const row = await trx
		.insertInto("directory.network_rules")
		.values({ rules: JSON.stringify(rules), set_by: viewer.personId })
		.returning("network_rules_id")
		.executeTakeFirstOrThrow();
	return row.network_rules_id;
}
