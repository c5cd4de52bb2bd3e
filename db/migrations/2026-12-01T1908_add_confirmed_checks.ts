import { type Kysely, sql } from "kysely";

// Which soft edit checks the grower confirmed of an answer, each with the values that were asked about: a changed value is
// asked about again. The rights of the table hold for the new column too.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.answer add column confirmed jsonb not null default '[]'
		constraint answer_confirmed_list check (jsonb_typeof(confirmed) = 'array')`.execute(db);
	// What an operation told in earlier surveys, such as the weight of its crate, is looked for at each screen.
	await sql`create index response_by_operation on collect.response (operation_id)`.execute(db);
}
