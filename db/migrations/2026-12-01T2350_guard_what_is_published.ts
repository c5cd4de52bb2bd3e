import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	// An owner may allow that figures are published which others could work the owner's own part out of.
	await sql`alter table directory.owner
		add column publication_waived_at timestamptz,
		add column publication_waived_by uuid references auth.person on delete restrict,
		add constraint owner_waiver_whole check (num_nonnulls(publication_waived_at, publication_waived_by) in (0, 2))`.execute(
		db,
	);

	// A draft without an audit is neither: null is no answer to whether it passed.
	await sql`alter table collect.release_draft add constraint release_draft_audited_passed
		check (status not in ('audited', 'approved') or coalesce((audit ->> 'passed')::boolean, false))`.execute(db);

	// A release is the copy of one draft that passed its audit, whoever writes it and by whichever way. Where the writer sees no
	// draft, there is none.
	await sql`create function release.refuse_unaudited() returns trigger language plpgsql
		set search_path = '' as $$
		begin
			if not exists (select from collect.release_draft d where d.release_draft_id = new.release_id
				and d.status = 'audited' and (d.audit ->> 'passed')::boolean and d.checksum = new.checksum) then
				raise exception 'release_not_audited' using errcode = 'check_violation';
			end if;
			return new;
		end $$`.execute(db);
	await sql`create trigger release_of_audited_draft before insert on release.release
		for each row execute function release.refuse_unaudited()`.execute(db);

	// Only what the audit knew as shown is shown: its cells are those of the draft.
	await sql`create function release.refuse_other_cell() returns trigger language plpgsql
		set search_path = '' as $$
		begin
			if exists (select from added a where not exists (select from collect.release_draft_cell d
				where d.release_draft_id = a.release_id and d.crop_key = a.crop_key and d.area_key = a.area_key
					and d.status = a.status)) then
				raise exception 'cell_not_as_audited' using errcode = 'check_violation';
			end if;
			return null;
		end $$`.execute(db);
	await sql`create trigger cell_as_audited after insert on release.cell
		referencing new table as added for each statement execute function release.refuse_other_cell()`.execute(db);
}
