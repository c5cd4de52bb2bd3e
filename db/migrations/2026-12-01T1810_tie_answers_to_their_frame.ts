import { type Kysely, sql } from "kysely";

// A response or a fact names its state, and row-level security goes by that name. Written by the desk of one state under
// its own name for another state's operation it would have passed: now the frame must hold that operation in that state.
export async function up(db: Kysely<unknown>): Promise<void> {
	for (const table of ["response", "fact"]) {
		const name = sql.id("collect", table);
		await sql`create policy of_the_frame on ${name} as restrictive for all to tallygrove_app
			using (true)
			with check (exists (select from collect.frame_operation f
				where f.survey_id = ${sql.id(table)}.survey_id and f.operation_id = ${sql.id(table)}.operation_id
					and f.state_fips = ${sql.id(table)}.state_fips))`.execute(db);
	}
}
