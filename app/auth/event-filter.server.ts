import { type ExpressionBuilder, sql } from "kysely";
import type { DB } from "#db/schema.ts";
import { Words } from "#app/lib/words.ts";
import { byLink, type LogQuery } from "./log-query.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

/** The one place that narrows the log, for its page and its file alike. */
export function selectEvents(trx: Trx, _viewer: Coordinator, query: LogQuery) {
	const { q, show, who, survey, from, to } = query;
	return trx
		.selectFrom("log.event as e")
		.$if(show !== "all", (events) =>
			show.includes(".") ? events.where("e.action", "=", show) : events.where("e.action", "like", `${show}.%`),
		)
		.$if(who === byLink, (events) => events.where("e.person_id", "is", null))
		.$if(who !== "" && who !== byLink, (events) => events.where("e.person_id", "=", who))
		.$if(survey !== "", (events) => events.where(isOfSurvey(survey)))
		.$if(from !== "", (events) => events.where("e.happened_at", ">=", startOf(from)))
		.$if(to !== "", (events) => events.where("e.happened_at", "<", startOf(to, 1)))
		.$if(q !== "", (events) => events.where((eb) => isMeant(trx, eb, q)));
}

/** When a day begins on the network's clock, or one so many days later. */
const startOf = (day: string, later = 0) =>
	sql<Date>`(${day}::date + ${later}::int)::timestamp at time zone auth.network_time_zone()`;

/** What a search finds: who did it, to whom, and the address of a report. */
function isMeant(trx: Trx, eb: ExpressionBuilder<DB & { e: DB["log.event"] }, "e">, q: string) {
	const pattern = `%${q.replace(/[\\%_]/g, String.raw`\$&`)}%`;
	// People are few and events many: who is meant is found first, and the log then goes by ids.
	const meant = trx
		.selectFrom("auth.person")
		.where((person) => person.or([person("display_name", "ilike", pattern), person("email", "ilike", pattern)]));
	const requests = trx
		.selectFrom("auth.access_request")
		.where("person_id", "in", meant.select("person_id"))
		.select(sql<string>`access_request_id::text`.as("id"));
	return eb.or([
		eb("e.person_id", "in", meant.select("person_id")),
		eb("e.subject_id", "in", meant.select(sql<string>`person_id::text`.as("id"))),
		eb("e.subject_id", "in", requests),
		eb(sql`e.detail ->> 'slug'`, "ilike", pattern),
	]);
}

/** A survey's own events, those of its answers, its drafts and releases, and the reports on them. */
const isOfSurvey = (surveyId: string) => sql<boolean>`(
	e.detail ->> 'surveyId' = ${surveyId} or (e.subject_kind, e.subject_id) in (
		select 'survey', ${surveyId}::text
		union all select 'release_draft', d.release_draft_id::text from collect.release_draft d
			where d.survey_id = ${surveyId}::uuid
		union all select 'release', r.release_id::text from release.release r where r.series_id = ${surveyId}::uuid
		union all select 'report', b.report_id::text from publish.report b join release.release r using (release_id)
			where r.series_id = ${surveyId}::uuid))`;

/** Who and what the log can be narrowed to: people who ever worked here or asked for data, and surveys, the newest first. */
export async function listLogChoices(trx: Trx, _viewer: Coordinator) {
	const people = await trx
		.selectFrom("auth.person as p")
		.select(["p.person_id as personId", "p.display_name as name", "p.email"])
		.where("p.forgotten_at", "is", null)
		.where(
			sql<boolean>`(exists (select from auth.role_grant g where g.person_id = p.person_id and g.role <> 'grower')
				or exists (select from auth.access_request a where a.person_id = p.person_id))`,
		)
		.orderBy("p.display_name")
		.orderBy("p.person_id")
		.execute();
	const surveys = await trx
		.selectFrom("collect.survey")
		.select(["survey_id as surveyId", "season", "title"])
		.orderBy("season", "desc")
		.orderBy("created_at", "desc")
		.execute();
	return { people, surveys: surveys.map((row) => ({ ...row, title: Words.parse(row.title) })) };
}
