import { type Kysely, sql } from "kysely";

// Who consented to a photo in a report can withdraw that. The picture then leaves the database, and its row stays to say in the
// photo's place when and why it was taken away. Printed reports that showed it are deleted and printed anew.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table publish.report_photo
		alter column bytes drop not null,
		add column taken_away_at timestamptz,
		add column taken_away_by uuid references auth.person on delete restrict,
		add column taken_away_because text check (taken_away_because in ('consent_withdrawn', 'shown_by_mistake')),
		add constraint report_photo_taken_away_whole check (
			num_nonnulls(taken_away_at, taken_away_by, taken_away_because) in (0, 3)),
		add constraint report_photo_gone_when_taken_away check ((bytes is null) = (taken_away_at is not null))`.execute(db);
	await sql`grant update (bytes, taken_away_at, taken_away_by, taken_away_because)
		on publish.report_photo to tallygrove_app`.execute(db);
	await sql`grant select (taken_away_at, taken_away_because) on publish.report_photo to tallygrove_reader`.execute(db);
	await sql`grant delete on publish.report_file to tallygrove_app`.execute(db);
	// What is published is never swapped for another picture, nor brought back.
	await sql`create function publish.refuse_other_photo() returns trigger language plpgsql as $$
		begin
			if old.taken_away_at is not null or new.taken_away_at is null then
				raise exception 'a photo of a report can be taken away and nothing else';
			end if;
			return new;
		end $$`.execute(db);
	await sql`create trigger report_photo_only_goes before update on publish.report_photo
		for each row execute function publish.refuse_other_photo()`.execute(db);
}
