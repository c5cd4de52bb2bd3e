import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table directory.state (
		state_fips text primary key check (state_fips ~ '^[0-9]{2}$'),
		name text not null,
		postal text not null unique check (postal ~ '^[A-Z]{2}$'),
		time_zone text not null
	)`.execute(db);

	await sql`create table directory.district (
		district_key text primary key,
		state_fips text not null references directory.state on delete restrict,
		name text not null,
		constraint district_name_once unique (state_fips, name)
	)`.execute(db);

	await sql`create table directory.county (
		county_fips text primary key check (county_fips ~ '^[0-9]{5}$'),
		state_fips text not null references directory.state on delete restrict,
		district_key text references directory.district on delete restrict,
		name text not null,
		constraint county_in_its_state check (left(county_fips, 2) = state_fips)
	)`.execute(db);
	await sql`create index county_by_state on directory.county (state_fips)`.execute(db);

	await sql`create table directory.county_neighbor (
		county_fips text not null references directory.county on delete cascade,
		neighbor_fips text not null check (neighbor_fips ~ '^[0-9]{5}$'),
		primary key (county_fips, neighbor_fips)
	)`.execute(db);

	await sql`create table directory.crop (
		crop_key text primary key check (crop_key ~ '^[a-z_]+$'),
		position integer not null,
		plant_kind text not null check (plant_kind in ('tree', 'bush')),
		-- Null where the trade sells by weight only: a bushel is then not offered as a unit.
		bushel_lb double precision check (bushel_lb > 0)
	)`.execute(db);

	await sql`create table directory.owner (
		owner_id uuid primary key default gen_random_uuid(),
		name text not null check (length(name) between 1 and 200)
	)`.execute(db);

	await sql`create table directory.operation (
		operation_id uuid primary key default gen_random_uuid(),
		owner_id uuid not null references directory.owner on delete restrict,
		name text not null check (length(name) between 1 and 200),
		county_fips text not null references directory.county on delete restrict,
		state_fips text not null references directory.state on delete restrict,
		contact_name text not null check (length(contact_name) <= 200),
		email text check (length(email) <= 254),
		phone text check (length(phone) <= 40),
		language text not null default 'en' check (language in ('en', 'es')),
		mass_unit text not null default 'lb',
		status text not null default 'active' check (status in ('active', 'left')),
		created_at timestamptz not null default now(),
		updated_at timestamptz not null default now(),
		constraint operation_county_in_state check (left(county_fips, 2) = state_fips)
	)`.execute(db);
	await sql`create index operation_by_state on directory.operation (state_fips, name, operation_id)`.execute(db);
	await sql`create index operation_by_owner on directory.operation (owner_id)`.execute(db);

	await sql`create table directory.planting (
		planting_id uuid primary key default gen_random_uuid(),
		operation_id uuid not null references directory.operation on delete cascade,
		crop_key text not null references directory.crop on delete restrict,
		cultivar text not null default '' check (length(cultivar) <= 100),
		bearing_trees integer not null default 0 check (bearing_trees >= 0),
		young_trees integer not null default 0 check (young_trees >= 0),
		area_acres double precision check (area_acres > 0),
		planted_year integer check (planted_year between 1850 and 2100),
		removed_on date
	)`.execute(db);
	await sql`create index planting_by_operation on directory.planting (operation_id)`.execute(db);

	for (const table of ["owner", "operation", "planting"]) {
		await sql`alter table ${sql.id("directory", table)} enable row level security`.execute(db);
	}
	// 'desk' sees granted states, 'grower' its own operations, 'network' (jobs, release drafting) every row.
	await sql`create policy by_scope on directory.operation to tallygrove_app using (
		auth.scope() = 'network'
		or (auth.scope() = 'desk' and state_fips = any (auth.scope_states()))
		or (auth.scope() = 'grower' and operation_id = any (auth.scope_operations())))`.execute(db);
	await sql`create policy by_scope on directory.planting to tallygrove_app using (exists (
		select from directory.operation o where o.operation_id = planting.operation_id))`.execute(db);
	await sql`create policy by_scope on directory.owner to tallygrove_app using (
		auth.scope() = 'network'
		or exists (select from directory.operation o where o.owner_id = owner.owner_id))
		with check (auth.scope() in ('network', 'desk'))`.execute(db);

	await sql`grant select on directory.state, directory.district, directory.county, directory.county_neighbor, directory.crop
		to tallygrove_app`.execute(db);
	await sql`grant select, insert, update on directory.owner, directory.operation, directory.planting to tallygrove_app`.execute(
		db,
	);
}
