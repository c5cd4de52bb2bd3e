import { type Kysely, sql } from "kysely";

// A draft can be mended and thrown away as long as nobody is asked by it. From its opening on a survey and its states stay.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.refuse_loss_of_states() returns trigger language plpgsql security definer
		set search_path = '' as $$ begin
			if exists (select from collect.survey s where s.survey_id = old.survey_id and s.opened_at is not null) then
				raise exception 'an opened survey keeps its states' using errcode = 'check_violation',
					constraint = 'states_for_good';
			end if;
			return old;
		end $$`.execute(db);
	await sql`create trigger states_for_good before delete on collect.survey_state for each row
		execute function collect.refuse_loss_of_states()`.execute(db);
	await sql`grant delete on collect.survey_state to tallygrove_app`.execute(db);
	await sql`create function collect.discard_draft(draft uuid) returns void language plpgsql security definer
		set search_path = '' as $$ begin
			delete from collect.survey s where s.survey_id = draft and s.opened_at is null and s.rehearsal_of is null
				and auth.scope() = 'desk' and not exists (select from collect.survey_state g
					where g.survey_id = draft and g.state_fips <> all (auth.scope_states()));
			if not found then
				raise exception 'no draft to throw away' using errcode = 'check_violation';
			end if;
		end $$`.execute(db);
	await sql`revoke execute on function collect.discard_draft(uuid) from public`.execute(db);
	await sql`grant execute on function collect.discard_draft(uuid) to tallygrove_app`.execute(db);
}
