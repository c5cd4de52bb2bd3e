import { type Kysely, sql } from "kysely";

// Where exactly an orchard lies finds its county and nothing else, so only its grower reads it: the desk and the network's
// own work see no row, whatever their states.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table directory.operation_pin (
		operation_id uuid primary key references directory.operation on delete cascade,
		longitude double precision not null check (longitude between -180 and 180),
		latitude double precision not null check (latitude between -90 and 90),
		set_at timestamptz not null default now()
	)`.execute(db);
	await sql`alter table directory.operation_pin enable row level security`.execute(db);
	await sql`create policy of_its_grower on directory.operation_pin to tallygrove_app using (
		auth.scope() = 'grower' and operation_id = any (auth.scope_operations()))`.execute(db);
	await sql`grant select, insert, update, delete on directory.operation_pin to tallygrove_app`.execute(db);
}
