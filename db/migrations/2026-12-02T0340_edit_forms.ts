import { type Kysely, sql } from "kysely";

// An associate's own forms. A form belongs to the states that its maker held, and whoever is granted one of them may change
// it; one of no state ships with the product. Everybody may read all of them: they are questions, not answers.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.form
		add column made_by uuid references auth.person on delete restrict,
		add column state_fips text[] not null default '{}',
		add constraint form_made_whole check ((made_by is null) = (cardinality(state_fips) = 0))`.execute(db);
	await sql`alter table collect.form_version add column published_by uuid references auth.person on delete restrict`.execute(
		db,
	);
	// What a version says, growers have answered: it stays as it is.
	await sql`revoke update on collect.form_version from tallygrove_app`.execute(db);

	await sql`create table collect.form_draft (
		form_id uuid primary key references collect.form on delete cascade,
		draft jsonb not null,
		-- Counts changes, so that one made upon an older draft is noticed.
		edit integer not null default 1 check (edit >= 1),
		edited_by uuid not null references auth.person on delete restrict,
		edited_at timestamptz not null default now(),
		-- As it was before the last change, which undoing puts back.
		before jsonb
	)`.execute(db);

	await guardWrites(db);
}

async function guardWrites(db: Kysely<unknown>): Promise<void> {
	const mayWrite = sql`auth.scope() = 'network' or (auth.scope() = 'desk'
		and (state_fips = '{}' or state_fips && auth.scope_states()))`;
	await sql`alter table collect.form enable row level security`.execute(db);
	await sql`create policy read_by_all on collect.form for select to tallygrove_app using (true)`.execute(db);
	await sql`create policy added_by_scope on collect.form for insert to tallygrove_app with check (${mayWrite})`.execute(
		db,
	);
	await sql`create policy changed_by_scope on collect.form for update to tallygrove_app using (${mayWrite})`.execute(
		db,
	);
	await sql`create policy dropped_by_scope on collect.form for delete to tallygrove_app
		using (auth.scope() = 'desk' and state_fips && auth.scope_states())`.execute(db);
	await sql`grant delete on collect.form to tallygrove_app`.execute(db);

	await sql`alter table collect.form_version enable row level security`.execute(db);
	await sql`create policy read_by_all on collect.form_version for select to tallygrove_app using (true)`.execute(db);
	await sql`create policy added_by_scope on collect.form_version for insert to tallygrove_app
		with check (${ofOwnForm("form_version")})`.execute(db);

	await sql`alter table collect.form_draft enable row level security`.execute(db);
	await sql`create policy read_at_desks on collect.form_draft for select to tallygrove_app
		using (auth.scope() in ('network', 'desk'))`.execute(db);
	await sql`create policy added_by_scope on collect.form_draft for insert to tallygrove_app
		with check (${ofOwnForm("form_draft")})`.execute(db);
	await sql`create policy changed_by_scope on collect.form_draft for update to tallygrove_app
		using (${ofOwnForm("form_draft")})`.execute(db);
	await sql`grant select, insert, update on collect.form_draft to tallygrove_app`.execute(db);
}

function ofOwnForm(table: string) {
	return sql`auth.scope() = 'network' or (auth.scope() = 'desk' and exists (
		select from collect.form f where f.form_id = ${sql.id(table)}.form_id
			and (f.state_fips = '{}' or f.state_fips && auth.scope_states())))`;
}
