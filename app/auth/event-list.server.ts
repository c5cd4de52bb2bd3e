import { sql } from "kysely";
import { z } from "zod";
import { Words } from "#app/lib/words.ts";
import type { LogQuery } from "./log-actions.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

const pageSize = 50;

/**
 * What of an event's detail is told. Anything else that was logged stays unsaid: which operation answered is not a
 * coordinator's to see, nor is what it answered.
 */
const Told = z.object({
	role: z.enum(["grower", "associate", "coordinator", "researcher"]).optional().catch(undefined),
	/** How many were asked when a survey was opened, and how many mails were queued. */
	operations: z.number().optional().catch(undefined),
	queued: z.number().optional().catch(undefined),
	/** How many operations were changed or handed out at once. */
	growers: z.number().optional().catch(undefined),
	/** The new closing time. */
	to: z.iso.datetime().optional().catch(undefined),
	/** A release's number, and a report's address. */
	number: z.number().optional().catch(undefined),
	slug: z.string().optional().catch(undefined),
	byLink: z.boolean().optional().catch(undefined),
});

export type LoggedEvent = {
	eventId: number;
	happenedAt: Date;
	/** Null where nobody was signed in: a personal link, or a sign-in that failed. */
	person: { name: string; email: string | null } | null;
	action: string;
	/** Whom it is about, where that is a person: of a grant or a request. */
	about: string | null;
	survey: { season: number; title: Words } | null;
	stateFips: string | null;
	told: z.infer<typeof Told>;
};

/** The one place that reads the log. Search looks at who did it, to whom, and the address of a report. */
function selectEvents(trx: Trx, _viewer: Coordinator, { q, show }: LogQuery) {
	const pattern = `%${q.replace(/[\\%_]/g, String.raw`\$&`)}%`;
	// People are few and events many: who is meant is found first, and the log then goes by ids.
	const meant = trx
		.selectFrom("auth.person")
		.where((eb) => eb.or([eb("display_name", "ilike", pattern), eb("email", "ilike", pattern)]));
	const requests = trx
		.selectFrom("auth.access_request")
		.where("person_id", "in", meant.select("person_id"))
		.select(sql<string>`access_request_id::text`.as("id"));
	return trx
		.selectFrom("log.event as e")
		.$if(show !== "all", (events) => events.where("e.action", "like", `${show}.%`))
		.$if(q !== "", (events) =>
			events.where((eb) =>
				eb.or([
					eb("e.person_id", "in", meant.select("person_id")),
					eb("e.subject_id", "in", meant.select(sql<string>`person_id::text`.as("id"))),
					eb("e.subject_id", "in", requests),
					eb(sql`e.detail ->> 'slug'`, "ilike", pattern),
				]),
			),
		);
}

/** A page of what was done, newest first. */
export async function listEvents(trx: Trx, viewer: Coordinator, query: LogQuery) {
	const events = selectEvents(trx, viewer, query);
	const { total } = await events.select((eb) => eb.fn.countAll<number>().as("total")).executeTakeFirstOrThrow();
	const pageCount = Math.max(1, Math.ceil(total / pageSize));
	const page = Math.min(query.page, pageCount);
	const rows = await events
		.leftJoin("auth.person as p", "p.person_id", "e.person_id")
		// A subject is told by kind and id as text, whatever table it lies in.
		.leftJoin("auth.access_request as r", (join) =>
			join.on("e.subject_kind", "=", "access_request").on(sql`r.access_request_id::text`, "=", sql.ref("e.subject_id")),
		)
		.leftJoin("auth.person as a", "a.person_id", "r.person_id")
		.leftJoin("auth.person as g", (join) =>
			join.on("e.subject_kind", "=", "person").on(sql`g.person_id::text`, "=", sql.ref("e.subject_id")),
		)
		.leftJoin("collect.release_draft as d", (join) =>
			join.on("e.subject_kind", "=", "release_draft").on(sql`d.release_draft_id::text`, "=", sql.ref("e.subject_id")),
		)
		.leftJoin("collect.survey as s", (join) =>
			join.on(
				sql`s.survey_id::text`,
				"=",
				sql`case e.subject_kind when 'survey' then e.subject_id
					when 'release_draft' then d.survey_id::text else e.detail ->> 'surveyId' end`,
			),
		)
		.select([
			"e.event_id",
			"e.happened_at",
			"p.display_name",
			"p.email",
			"e.action",
			sql<string | null>`coalesce(g.display_name, a.display_name)`.as("about"),
			"s.season",
			"s.title",
			"e.state_fips",
			"e.detail",
		])
		.orderBy("e.happened_at", "desc")
		.orderBy("e.event_id", "desc")
		.limit(pageSize)
		.offset((page - 1) * pageSize)
		.execute();
	return { rows: rows.map(toEvent), total, page, pageCount };
}

type EventRow = {
	event_id: number;
	happened_at: Date;
	display_name: string | null;
	email: string | null;
	action: string;
	about: string | null;
	season: number | null;
	title: unknown;
	state_fips: string | null;
	detail: unknown;
};

function toEvent(row: EventRow): LoggedEvent {
	return {
		eventId: row.event_id,
		happenedAt: row.happened_at,
		person: row.display_name === null ? null : { name: row.display_name, email: row.email },
		action: row.action,
		about: row.about,
		survey: row.season === null ? null : { season: row.season, title: Words.parse(row.title) },
		stateFips: row.state_fips,
		told: Told.parse(row.detail),
	};
}
