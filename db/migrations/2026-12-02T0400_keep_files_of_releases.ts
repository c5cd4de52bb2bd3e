import { type Kysely, sql } from "kysely";

// The files of a release are made once and served as they were made, so that a citation's checksum holds for ever.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table release.file (
		release_id uuid not null references release.release on delete restrict,
		name text not null check (name ~ '^[A-Za-z0-9][A-Za-z0-9._-]{0,99}$'),
		position integer not null,
		media_type text not null,
		content bytea not null,
		byte_count integer not null,
		sha256 text not null,
		made_at timestamptz not null default now(),
		primary key (release_id, name),
		constraint file_as_summed check (byte_count = length(content) and sha256 = encode(sha256(content), 'hex'))
	)`.execute(db);
	// Uncompressed beside the row: a part of a file is then read without the rest of it, and most are packed already.
	await sql`alter table release.file alter column content set storage external`.execute(db);
	await sql`create trigger frozen before update or delete or truncate on release.file
		for each statement execute function release.refuse_change()`.execute(db);
	await sql`alter table release.file enable row level security`.execute(db);
	await sql`create policy standing on release.file for select to tallygrove_reader
		using (release_id not in (select w.release_id from release.withdrawal w))`.execute(db);
	await sql`create policy desk_and_jobs on release.file to tallygrove_app using (true) with check (true)`.execute(db);
	await sql`grant select on release.file to tallygrove_reader`.execute(db);
	await sql`grant select, insert on release.file to tallygrove_app`.execute(db);
}
