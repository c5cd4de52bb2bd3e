import { sql } from "kysely";

/**
 * Those who were asked, have sent nothing in and have not said that they will not: operations `o` of a frame `f`, to be rung
 * or written to. Answers are looked up one by one (`offset 0` leaves the planner no other way): where it knew nothing of them
 * yet, it once went through all of them for each operation, for three seconds. By the operation's id and not the frame's, so
 * that they are looked up of those alone whose name was found.
 */
export const isWaitedFor = sql<boolean>`f.disposition in ('not_reached', 'undeliverable', 'reached', 'partial')
	and o.status = 'active' and not exists (select from collect.response r
		where r.survey_id = f.survey_id and r.operation_id = o.operation_id
			and (r.submitted_at is not null or r.late_at is not null or r.withdrawn_at is not null) offset 0)`;
