import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { ReleaseRules } from "./draft.ts";
import { agreementTo, looseningOf, movesBetween, type RuleMove, type RulesRow } from "./rules-change.ts";
import { type RulesForm, rulesOf } from "./rules.schema.ts";

/** The settings that hold, or undefined where nobody has ever changed any. */
export async function findRules(trx: Trx): Promise<ReleaseRules | undefined> {
	return (await findLatest(trx))?.rules;
}

async function findLatest(trx: Trx): Promise<{ networkRulesId: number; rules: ReleaseRules } | undefined> {
	const row = await trx
		.selectFrom("directory.network_rules")
		.select(["network_rules_id", "rules"])
		.orderBy("network_rules_id", "desc")
		.limit(1)
		.executeTakeFirst();
	return row && { networkRulesId: row.network_rules_id, rules: ReleaseRules.parse(row.rules) };
}

/** Every change of the settings, the latest first. */
export async function listRulesRows(trx: Trx, _viewer: Coordinator): Promise<RulesRow[]> {
	const rows = await trx
		.selectFrom("directory.network_rules as r")
		.innerJoin("auth.person as p", "p.person_id", "r.set_by")
		.select(["r.network_rules_id", "r.rules", "r.set_at", "p.display_name"])
		.orderBy("r.network_rules_id", "desc")
		.execute();
	return rows.map((row) => ({
		networkRulesId: row.network_rules_id,
		rules: ReleaseRules.parse(row.rules),
		setBy: row.display_name,
		setAt: row.set_at,
	}));
}

type Saved =
	| { outcome: "saved" | "unchanged" | "changed_meanwhile" }
	| { outcome: "loosens"; loosening: RuleMove[]; agreement: string };

/**
 * Sets the network's settings for drafts to come. Drafts and releases keep those that they were made with. What loosens them
 * waits until the very same change was agreed to, and nobody overwrites what they have not seen.
 * @param start what holds where nobody has changed anything.
 */
export async function saveRules(trx: Trx, viewer: Coordinator, form: RulesForm, start: ReleaseRules): Promise<Saved> {
	await sql`select pg_advisory_xact_lock(hashtext('network_rules'))`.execute(trx);
	const latest = await findLatest(trx);
	if ((latest?.networkRulesId ?? 0) !== form.basedOn) return { outcome: "changed_meanwhile" };
	const rules = rulesOf(form);
	const moves = movesBetween(latest?.rules ?? start, rules);
	if (moves.length === 0) return { outcome: "unchanged" };
	const loosening = looseningOf(moves);
	const agreement = agreementTo(loosening);
	if (loosening.length > 0 && form.agreed !== agreement) return { outcome: "loosens", loosening, agreement };
	const { network_rules_id } = await trx
		.insertInto("directory.network_rules")
		.values({ rules: JSON.stringify(rules), set_by: viewer.personId })
		.returning("network_rules_id")
		.executeTakeFirstOrThrow();
	const subject = { subjectKind: "settings", subjectId: String(network_rules_id) };
	await logEvent(trx, { personId: viewer.personId, action: "settings.changed", ...subject });
	return { outcome: "saved" };
}
