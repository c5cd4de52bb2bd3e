import { type Kysely, sql } from "kysely";

// A survey goes by the clock of most of its states; where two clocks have as many, by the western one's, so that nobody's day
// ends before it is told to. West and east are asked of one winter's moment: summer time would let them change places.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.clock_of_states(states text[]) returns text language sql stable parallel safe
		as $$ select time_zone from directory.state where state_fips = any (states) group by time_zone
			order by count(*) desc, timestamptz '2026-01-01 12:00Z' at time zone time_zone, time_zone limit 1 $$`.execute(db);
	await sql`create function collect.clock_of_survey(survey uuid) returns text language sql stable parallel safe
		as $$ select collect.clock_of_states(array(select state_fips from collect.survey_state where survey_id = survey)) $$`.execute(
		db,
	);
	await sql`revoke execute on function collect.clock_of_states(text[]), collect.clock_of_survey(uuid) from public`.execute(
		db,
	);
	await sql`grant execute on function collect.clock_of_states(text[]), collect.clock_of_survey(uuid)
		to tallygrove_app`.execute(db);
}
