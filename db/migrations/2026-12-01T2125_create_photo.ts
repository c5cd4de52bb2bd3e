import { type Kysely, sql } from "kysely";

// Photos that a grower adds to a response. The files lie outside the database, under names that nothing leads to but this
// table; a row is written after its files, so that what is here can be shown. The id comes from who sends the photo: sent
// again after a break it is the same one.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.photo (
		photo_id uuid primary key,
		response_id uuid not null references collect.response on delete restrict,
		question_key text not null,
		file_name text not null unique check (file_name ~ '^[0-9a-f]{32}$'),
		width_px integer not null check (width_px > 0),
		height_px integer not null check (height_px > 0),
		size_bytes integer not null check (size_bytes > 0),
		added_at timestamptz not null default now()
	)`.execute(db);
	await sql`create index photo_by_response on collect.photo (response_id)`.execute(db);
	await sql`alter table collect.photo enable row level security`.execute(db);
	await sql`create policy by_scope on collect.photo to tallygrove_app using (exists (
		select from collect.response r where r.response_id = photo.response_id))`.execute(db);
	// A photo is never changed: another one is another photo.
	await sql`grant select, insert, delete on collect.photo to tallygrove_app`.execute(db);
}
