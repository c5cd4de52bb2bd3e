import { type Kysely, sql } from "kysely";

// Associates group the counties of their own states. Everybody of the product reads the tree of areas, as before; only who
// works for a state, or the network, changes what belongs to it.
export async function up(db: Kysely<unknown>): Promise<void> {
	for (const table of ["district", "county"]) {
		const name = sql.id("directory", table);
		await sql`alter table ${name} enable row level security`.execute(db);
		await sql`create policy everybody_reads on ${name} for select to tallygrove_app using (true)`.execute(db);
		await sql`create policy by_scope on ${name} to tallygrove_app using (auth.scope() = 'network'
			or (auth.scope() = 'desk' and state_fips = any (auth.scope_states())))`.execute(db);
	}
	await sql`alter table directory.district add constraint district_key_and_state unique (district_key, state_fips)`.execute(
		db,
	);
	await sql`alter table directory.county add constraint county_and_district_in_one_state
		foreign key (district_key, state_fips) references directory.district (district_key, state_fips) on delete restrict`.execute(
		db,
	);
	await sql`grant insert, update (name), delete on directory.district to tallygrove_app`.execute(db);
	await sql`grant update (district_key) on directory.county to tallygrove_app`.execute(db);

	// How the counties of a state were grouped before each change, so that it can be taken back.
	await sql`create table directory.district_change (
		district_change_id integer primary key generated always as identity,
		state_fips text not null references directory.state on delete restrict,
		before jsonb not null,
		changed_by uuid not null references auth.person on delete restrict,
		changed_at timestamptz not null default now()
	)`.execute(db);
	await sql`create index district_change_by_state on directory.district_change (state_fips, district_change_id desc)`.execute(
		db,
	);
	await sql`alter table directory.district_change enable row level security`.execute(db);
	await sql`create policy by_scope on directory.district_change to tallygrove_app using (auth.scope() = 'network'
		or (auth.scope() = 'desk' and state_fips = any (auth.scope_states())))`.execute(db);
	await sql`grant select, insert on directory.district_change to tallygrove_app`.execute(db);
}
