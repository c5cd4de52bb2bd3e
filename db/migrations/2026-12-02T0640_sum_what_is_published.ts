import { type Kysely, sql } from "kysely";

// A release's checksum was that of its whole draft, exact counts and unrounded figures with it, and so could prove a guess at
// them right. Now a draft keeps two sums from its audit on: the whole one, which stays at the desk and is checked before
// publication as before, and one over what is published, which the release tells. A draft that is under way from before has
// no second sum: it is told as changed, and drafted anew.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.release_draft add column published_checksum text`.execute(db);
	await sql`create or replace function release.refuse_unaudited() returns trigger language plpgsql
		set search_path = '' as $$
		begin
			if not exists (select from collect.release_draft d where d.release_draft_id = new.release_id
				and d.status = 'scheduled' and (d.audit ->> 'passed')::boolean and d.checksum is not null
				and d.published_checksum = new.checksum
				and d.publish_at <= clock_timestamp() and d.survey_id = new.series_id
				and d.revises is not distinct from new.revises) then
				raise exception 'release_not_audited' using errcode = 'check_violation';
			end if;
			return new;
		end $$`.execute(db);
	await mendReleases(db);
}

/**
 * What is published is frozen, for the owner too: only this once is taken out what should not have been told. That is a sum
 * over exact counts; how many cells are withheld for which reason; strata with fewer than two answers; and how many answered
 * where the cell of all crops is not shown.
 */
async function mendReleases(db: Kysely<unknown>): Promise<void> {
	await sql`alter table release.release disable trigger frozen`.execute(db);
	await sql`update release.release r set
		checksum = (
			select encode(sha256(convert_to(coalesce(string_agg(line, E'\n' order by line collate "C"), ''), 'UTF8')), 'hex')
			from (
				select (to_jsonb(c) - 'release_id')::text as line from release.cell c where c.release_id = r.release_id
				union all
				select (to_jsonb(f) - 'release_id')::text from release.figure f where f.release_id = r.release_id
			) as lines),
		audit = audit - 'withheldForOwnSake' - 'shields',
		method = method - 'joins' - 'all' - 'states'
			|| case when method ? 'all' and exists (${shownCell(sql`'network'`)})
				then jsonb_build_object('all', method -> 'all') else '{}' end
			|| jsonb_build_object('states', coalesce((
				select jsonb_agg(s.told order by s.told ->> 'stateFips') from jsonb_array_elements(method -> 'states') as s (told)
				where exists (${shownCell(sql`s.told ->> 'stateFips'`)})), '[]'))`.execute(db);
	await sql`alter table release.release enable trigger frozen`.execute(db);
}

const shownCell = (area: ReturnType<typeof sql>) => sql`select from release.cell c where c.release_id = r.release_id
	and c.crop_key = 'all' and c.area_key = ${area} and c.status = 'shown'`;
