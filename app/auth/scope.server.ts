import { sql, type Kysely, type Transaction } from "kysely";
import { connect } from "#db/connect.ts";
import type { DB } from "#db/schema.ts";
import { env } from "#app/lib/env.server.ts";
import { serviceAway } from "#app/lib/service-away.server.ts";

/**
 * Who a transaction works for. Row-level security on `directory` and `collect` reads it, as a second wall under the checks
 * in code: `desk` sees granted states, `grower` its own operations, `network` (jobs, the release's figures) all rows,
 * `none` (sessions, sign-in, access requests) no row of either schema. `surveyId` is the survey in hand: a rehearsal and its
 * invented operations are seen by no transaction but one that has it in hand.
 */
export type Scope = (
	| { kind: "desk"; stateFips: string[] }
	| { kind: "grower"; operationIds: string[] }
	| { kind: "network" }
	| { kind: "none" }
) & { surveyId?: string };

export type Trx = Transaction<DB>;

let app: Kysely<DB> | undefined;

function appDatabase(): Kysely<DB> {
	app ??= connect(env().DATABASE_URL, { name: "tallygrove-app", away: serviceAway });
	return app;
}

/** Runs `work` in one transaction under `scope`; the settings end with the transaction. `repeatable read` sees one moment throughout. */
export function scopedTransaction<T>(
	scope: Scope,
	work: (trx: Trx) => Promise<T>,
	isolation: "read committed" | "repeatable read" = "read committed",
): Promise<T> {
	return appDatabase()
		.transaction()
		.setIsolationLevel(isolation)
		.execute(async (trx) => {
			await setScope(trx, scope);
			return work(trx);
		});
}

/** Sets whom a transaction works for; for callers that own their transaction (the seed, jobs, tests). */
export async function setScope(trx: Trx, scope: Scope): Promise<void> {
	const states = scope.kind === "desk" ? scope.stateFips.join(",") : "";
	const operations = scope.kind === "grower" ? scope.operationIds.join(",") : "";
	await sql`select set_config('tallygrove.scope', ${scope.kind === "none" ? "" : scope.kind}, true),
		set_config('tallygrove.states', ${states}, true), set_config('tallygrove.operations', ${operations}, true)`.execute(
		trx,
	);
	if (scope.surveyId !== undefined) await setSurveyInHand(trx, scope.surveyId);
}

/** Names the survey that the rest of a transaction works on. A change of scope leaves it. */
export async function setSurveyInHand(trx: Trx, surveyId: string): Promise<void> {
	await sql`select set_config('tallygrove.survey', ${surveyId}, true)`.execute(trx);
}

/**
 * Does one piece of a transaction under another scope and then goes on under its own: for what must be known or written
 * there and is not the asker's to see. A failure ends the transaction, and with it either scope.
 */
export async function underScope<T>(trx: Trx, scope: Scope, work: () => Promise<T>): Promise<T> {
	const { rows } = await sql<{ kind: string; states: string; operations: string }>`select
		current_setting('tallygrove.scope', true) as kind, current_setting('tallygrove.states', true) as states,
		current_setting('tallygrove.operations', true) as operations`.execute(trx);
	const own = rows[0];
	await setScope(trx, scope);
	const result = await work();
	await sql`select set_config('tallygrove.scope', ${own?.kind ?? ""}, true),
		set_config('tallygrove.states', ${own?.states ?? ""}, true),
		set_config('tallygrove.operations', ${own?.operations ?? ""}, true)`.execute(trx);
	return result;
}

/** A coordinator's own scope has no state: what belongs to a state is done under that of a desk of this state alone. */
export function inState<T>(trx: Trx, stateFips: string, work: () => Promise<T>): Promise<T> {
	return underScope(trx, { kind: "desk", stateFips: [stateFips] }, work);
}
