import { type Kysely, sql } from "kysely";

// What is expected was a view with its owner's rights over surveys and drafts, which led the reader's role around the rows'
// guards, and told of rehearsals. Now it is a table that those who decide a minute write by the same statement.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`drop view publish.expected`.execute(db);
	await sql`create table publish.expected (
		kind text not null check (kind in ('survey_closes', 'release', 'report')),
		-- The survey, draft or report; not given to the reader's role.
		source_id uuid not null,
		title jsonb not null,
		season integer not null,
		expected_at timestamptz not null,
		again boolean not null,
		state_fips text[] not null,
		primary key (kind, source_id)
	)`.execute(db);
	await sql`grant select, insert, delete on publish.expected to tallygrove_app`.execute(db);
	await sql`grant select (kind, title, season, expected_at, again, state_fips) on publish.expected to tallygrove_reader`.execute(
		db,
	);
	await defineRefresh(db);
	await keepByTriggers(db);
	await sql`select publish.tell_survey(survey_id) from collect.survey`.execute(db);
	await sql`select publish.tell_draft(release_draft_id) from collect.release_draft`.execute(db);
	await sql`select publish.tell_report(report_id) from publish.report`.execute(db);
}

type Part = ReturnType<typeof sql>;

/** One function a kind: takes away what stood and puts down what holds now. */
async function defineRefresh(db: Kysely<unknown>): Promise<void> {
	const define = (name: string, kind: string, source: Part) =>
		sql`create function ${sql.id("publish", name)}(of_source uuid) returns void language plpgsql as $$
			declare
				own_scope text := coalesce(current_setting('tallygrove.scope', true), '');
			begin
				-- An associate's scope sees some of a survey's states only.
				perform set_config('tallygrove.scope', 'network', true);
				delete from publish.expected where kind = ${sql.lit(kind)} and source_id = of_source;
				insert into publish.expected (kind, source_id, title, season, expected_at, again, state_fips)
				select ${sql.lit(kind)}, of_source, ${source};
				perform set_config('tallygrove.scope', own_scope, true);
			end $$`.execute(db);
	await define(
		"tell_survey",
		"survey_closes",
		sql`s.title, s.season, s.closes_at, false,
			array(select st.state_fips::text from collect.survey_state st where st.survey_id = s.survey_id order by 1)
			from collect.survey s where s.survey_id = of_source and s.opened_at is not null and s.closed_at is null
				and s.archived_at is null and s.rehearsal_of is null`,
	);
	await define(
		"tell_draft",
		"release",
		sql`s.title, s.season, d.publish_at, d.revises is not null, '{}'
			from collect.release_draft d join collect.survey s using (survey_id)
			where d.release_draft_id = of_source and d.status = 'scheduled' and d.publish_at is not null`,
	);
	// The survey's title: a report's own may tell a finding before its minute.
	await define(
		"tell_report",
		"report",
		sql`f.title, f.season, r.publish_at, r.corrects is not null, '{}'
			from publish.report r join release.release f using (release_id)
			where r.report_id = of_source and r.state = 'scheduled' and r.publish_at is not null
				and not exists (select from release.withdrawal w where w.release_id = r.release_id)`,
	);
}

async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	const keep = async (name: string, table: Part, events: string, call: Part) => {
		await sql`create function ${sql.id("publish", name)}() returns trigger language plpgsql as $$
			begin
				${call};
				return null;
			end $$`.execute(db);
		await sql`create trigger keep_what_is_expected after ${sql.raw(events)} on ${table}
			for each row execute function ${sql.id("publish", name)}()`.execute(db);
	};
	await keep(
		"keep_survey",
		sql`collect.survey`,
		"insert or update or delete",
		// A draft is told by its survey's title.
		sql`perform publish.tell_survey(coalesce(new.survey_id, old.survey_id));
			perform publish.tell_draft(d.release_draft_id) from collect.release_draft d where d.survey_id = new.survey_id`,
	);
	await keep(
		"keep_survey_state",
		sql`collect.survey_state`,
		"insert or delete",
		sql`perform publish.tell_survey(coalesce(new.survey_id, old.survey_id))`,
	);
	await keep(
		"keep_draft",
		sql`collect.release_draft`,
		"insert or update or delete",
		sql`perform publish.tell_draft(coalesce(new.release_draft_id, old.release_draft_id))`,
	);
	await keep(
		"keep_report",
		sql`publish.report`,
		"insert or update or delete",
		sql`perform publish.tell_report(coalesce(new.report_id, old.report_id))`,
	);
	await keep(
		"keep_withdrawal",
		sql`release.withdrawal`,
		"insert",
		sql`perform publish.tell_report(r.report_id) from publish.report r where r.release_id = new.release_id`,
	);
	const functions = ["tell_survey", "tell_draft", "tell_report"].map((name) => sql`${sql.id("publish", name)}(uuid)`);
	const triggers = ["keep_survey", "keep_survey_state", "keep_draft", "keep_report", "keep_withdrawal"].map(
		(name) => sql`${sql.id("publish", name)}()`,
	);
	const all = sql.join([...functions, ...triggers]);
	await sql`revoke all on function ${all} from public`.execute(db);
	await sql`grant execute on function ${all} to tallygrove_app`.execute(db);
}
