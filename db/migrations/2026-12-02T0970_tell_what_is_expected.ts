import { type Kysely, sql } from "kysely";

// A calendar tells beforehand what comes when. This view is all that the reader's role sees of it: what kind of thing, of
// which survey and season, and the minute. A report's own title is left out, since it may tell a finding before its minute.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create view publish.expected as
		select 'survey_closes' as kind, s.title, s.season, s.closes_at as expected_at, false as again,
			array(select st.state_fips::text from collect.survey_state st where st.survey_id = s.survey_id order by 1) as state_fips
		from collect.survey s
		where s.opened_at <= now() and s.closed_at is null and s.closes_at > now() and s.archived_at is null
		union all
		select 'release', s.title, s.season, d.publish_at, d.revises is not null, '{}'
		from collect.release_draft d join collect.survey s using (survey_id)
		where d.status = 'scheduled' and d.publish_at is not null
		union all
		select 'report', f.title, f.season, r.publish_at, r.corrects is not null, '{}'
		from publish.report r join release.release f using (release_id)
		where r.state = 'scheduled' and r.publish_at is not null
			and not exists (select from release.withdrawal w where w.release_id = r.release_id)`.execute(db);
	await sql`grant select on publish.expected to tallygrove_reader`.execute(db);
}
