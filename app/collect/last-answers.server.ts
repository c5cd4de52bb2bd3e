import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { OperationQuery } from "#app/directory/operation.schema.ts";

const newest = sql<number>`(select max(season) from collect.survey where opened_at is not null)`;
/** Answers that were sent in and not taken back, of `directory.operation o`. */
const answers = sql`collect.response r join collect.survey s on s.survey_id = r.survey_id
	where r.operation_id = o.operation_id and r.submitted_at is not null`;

const conditions: Record<Exclude<OperationQuery["answered"], "any">, RawBuilder<boolean>> = {
	this: sql<boolean>`exists (select from ${answers} and s.season = ${newest})`,
	last: sql<boolean>`exists (select from ${answers} and s.season = ${newest} - 1)`,
	not_this: sql<boolean>`not exists (select from ${answers} and s.season = ${newest})`,
	not_two: sql<boolean>`not exists (select from ${answers} and s.season >= ${newest} - 1)`,
	never: sql<boolean>`not exists (select from ${answers})`,
};

/** A condition on the list of growers by the season in which each last answered; null for all. */
export function answeredCondition(when: OperationQuery["answered"]): RawBuilder<boolean> | null {
	return when === "any" ? null : conditions[when];
}

/** When each of these operations last sent answers in. The caller has narrowed the ids. */
export async function listLastAnswers(trx: Trx, operationIds: string[]): Promise<Map<string, Date>> {
	const rows = await trx
		.selectFrom("collect.response")
		.select(["operation_id", sql<Date>`max(submitted_at)`.as("at")])
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.where("submitted_at", "is not", null)
		.groupBy("operation_id")
		.execute();
	return new Map(rows.map((row) => [row.operation_id, row.at]));
}
