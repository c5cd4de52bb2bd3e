import { type Kysely, sql } from "kysely";

// How many trees bear is told in the list of plantings and in answers; whichever was told last is asked back.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table directory.planting add column trees_told_at timestamptz`.execute(db);
	await sql`update directory.planting set trees_told_at = created_at`.execute(db);
	await sql`alter table directory.planting
		alter column trees_told_at set default now(), alter column trees_told_at set not null`.execute(db);
	await sql`create function directory.note_trees_told() returns trigger language plpgsql as $$
		begin
			new.trees_told_at := now();
			return new;
		end $$`.execute(db);
	await sql`create trigger trees_told before update of bearing_trees on directory.planting
		for each row when (old.bearing_trees is distinct from new.bearing_trees)
		execute function directory.note_trees_told()`.execute(db);
}
