import { type Kysely, sql } from "kysely";

// A mailing keeps the state of its operation's row in the frame, so that whose it is need not be looked up for each: counting
// whom to write to among 50,000 went through the whole frame for that alone, three times. Who sees which mailing is as it was;
// the foreign key holds the state to the frame's.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.frame_operation
		add constraint frame_operation_state unique (survey_id, operation_id, state_fips)`.execute(db);
	await sql`alter table collect.mailing add column state_fips text not null default ''`.execute(db);
	await sql`update collect.mailing m set state_fips = f.state_fips from collect.frame_operation f
		where f.survey_id = m.survey_id and f.operation_id = m.operation_id`.execute(db);
	await sql`alter table collect.mailing add constraint mailing_state_of_the_frame
		foreign key (survey_id, operation_id, state_fips)
		references collect.frame_operation (survey_id, operation_id, state_fips) on update cascade`.execute(db);
	// With the asker's own rights: of a row that is not theirs to see there is no state, and the policy refuses the mailing.
	await sql`create function collect.take_state_of_frame() returns trigger language plpgsql set search_path = '' as $$
		begin
			new.state_fips := coalesce((select f.state_fips from collect.frame_operation f
				where f.survey_id = new.survey_id and f.operation_id = new.operation_id), '');
			return new;
		end $$`.execute(db);
	await sql`create trigger state_of_the_frame before insert or update of survey_id, operation_id, state_fips on collect.mailing
		for each row execute function collect.take_state_of_frame()`.execute(db);
	await sql`alter policy by_scope on collect.mailing using ((select auth.scope()) = 'network'
		or state_fips = any ((select auth.desk_states())::text[])
		or operation_id = any ((select auth.grower_operations())::uuid[]))`.execute(db);
}
