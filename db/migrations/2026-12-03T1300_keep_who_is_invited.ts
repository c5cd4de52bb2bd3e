import { type Kysely, sql } from "kysely";

// Whom to invite and whom to remind is counted on two pages of the desk, over a whole frame and its mails each time (50,000
// operations: 100 ms). A row of the frame keeps now what its invitations came to, set by triggers on mailings in the same
// transaction; nobody else sets it. `collect.recount_invitations` makes it from nothing, for mailings written past the triggers.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.frame_operation
		add column is_invited boolean not null default false,
		add column invitation_went_out boolean not null default false`.execute(db);
	await sql`comment on column collect.frame_operation.is_invited is
		'an invitation is on its way or was sent: one that was given up invited nobody'`.execute(db);
	await sql`comment on column collect.frame_operation.invitation_went_out is
		'an invitation was sent, whatever became of it'`.execute(db);
	await setByRecount(db);
	await keepByTriggers(db);
	await sql`select collect.recount_invitations(survey_id) from collect.survey`.execute(db);
	await findThem(db);
}

/** Of operations `these`, or of all where null. Locks first: what is read after a wait must not be older than the wait. */
async function setByRecount(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.recount_invitations(of_survey uuid, these uuid[] default null) returns void
		language plpgsql as $$
		begin
			perform from collect.frame_operation f where f.survey_id = of_survey
				and (these is null or f.operation_id = any (these))
				order by f.operation_id for no key update;
			update collect.frame_operation f
			set is_invited = m.is_invited, invitation_went_out = m.went_out
			from (select g.operation_id, bool_or(n.mailing_id is not null and n.failed_at is null) as is_invited,
					bool_or(n.sent_at is not null) as went_out
				from collect.frame_operation g left join collect.mailing n on n.survey_id = g.survey_id
					and n.operation_id = g.operation_id and n.kind = 'invitation'
				where g.survey_id = of_survey and (these is null or g.operation_id = any (these))
				group by g.operation_id) m
			where f.survey_id = of_survey and f.operation_id = m.operation_id
				and (f.is_invited, f.invitation_went_out) is distinct from (m.is_invited, m.went_out);
		end $$`.execute(db);
	await sql`revoke all on function collect.recount_invitations(uuid, uuid[]) from public`.execute(db);
}

async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	const rows = {
		insert: sql`select survey_id, operation_id from came where kind = 'invitation'`,
		delete: sql`select survey_id, operation_id from went where kind = 'invitation'`,
		// Most changes of a mailing are notes of an attempt.
		update: sql`select survey_id, operation_id from (
			(select survey_id, operation_id, kind, failed_at is null, sent_at is null from came
				except all select survey_id, operation_id, kind, failed_at is null, sent_at is null from went)
			union all (select survey_id, operation_id, kind, failed_at is null, sent_at is null from went
				except all select survey_id, operation_id, kind, failed_at is null, sent_at is null from came)) d
			where kind = 'invitation'`,
	};
	const tables = {
		insert: "new table as came",
		delete: "old table as went",
		update: "old table as went new table as came",
	};
	for (const [event, changed] of Object.entries(rows)) {
		const name = sql.id("collect", `keep_invited_${event}`);
		await sql`create function ${name}() returns trigger language plpgsql security definer set search_path = '' as $$
			begin
				perform collect.recount_invitations(survey_id, array_agg(operation_id))
				from (${changed}) c group by survey_id order by survey_id;
				return null;
			end $$`.execute(db);
		await sql`revoke all on function ${name}() from public`.execute(db);
		await sql`create trigger ${sql.id(`keep_invited_${event}`)} after ${sql.raw(event)} on collect.mailing
			referencing ${sql.raw(tables[event as keyof typeof tables])} for each statement execute function ${name}()`.execute(db);
	}
	// The frame is written by pages too; what its mails came to is not theirs to say.
	await sql`revoke insert, update on collect.frame_operation from tallygrove_app`.execute(db);
	await sql`grant insert (survey_id, operation_id, owner_id, county_fips, state_fips, size_class, stratum_key, disposition),
		update (disposition, disposition_at) on collect.frame_operation to tallygrove_app`.execute(db);
}

/** Indexes of what is counted: who waits for an invitation, who can be reminded, who was not asked, who has not answered. */
async function findThem(db: Kysely<unknown>): Promise<void> {
	await sql`drop index collect.frame_operation_awaited`.execute(db);
	await sql`create index frame_operation_awaited on collect.frame_operation
		(survey_id, state_fips, is_invited, invitation_went_out) include (operation_id)
		where disposition in ('not_reached', 'reached', 'partial')`.execute(db);
	await sql`create index frame_operation_not_invited on collect.frame_operation (survey_id, state_fips)
		include (operation_id) where not is_invited`.execute(db);
	await sql`create index frame_operation_not_complete on collect.frame_operation (survey_id, state_fips)
		include (operation_id) where disposition <> 'complete'`.execute(db);
	await sql`drop index directory.operation_without_address`.execute(db);
	await sql`create index operation_without_address on directory.operation (state_fips) include (operation_id, rehearsal_id)
		where coalesce(email, '') = '' and left_at is null`.execute(db);
	await sql`create index operation_reachable on directory.operation (state_fips) include (operation_id, rehearsal_id)
		where coalesce(email, '') <> '' and mail_returned_at is null and mail_wanted and status = 'active'`.execute(db);
	await sql`drop index collect.mailing_invites`.execute(db);
	// How many have no address is not to be guessed from the columns behind the expression.
	await sql`create statistics directory.operation_address on (coalesce(email, '')) from directory.operation`.execute(
		db,
	);
}
