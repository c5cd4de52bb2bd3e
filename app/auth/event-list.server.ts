import { sql } from "kysely";
import { z } from "zod";
import { type Order, pageByKey, type PagePart } from "#app/lib/page-by-key.server.ts";
import type { PageByKey } from "#app/lib/page-by-key.ts";
import { Words } from "#app/lib/words.ts";
import { selectEvents } from "./event-filter.server.ts";
import type { LogQuery } from "./log-query.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

export const logPageSize = 50;
/** Beyond this the log's length is told as "more than". */
const countedTo = 10_000;

/**
 * What of an event's detail is told. Anything else that was logged stays unsaid: which operation answered is not a
 * coordinator's to see, nor is what it answered.
 */
const Told = z.object({
	role: z.enum(["grower", "associate", "coordinator", "researcher"]).optional().catch(undefined),
	/** How many were asked when a survey was opened, and how many mails were queued. */
	operations: z.number().optional().catch(undefined),
	queued: z.number().optional().catch(undefined),
	/** How many operations were changed or handed out at once, and how many events. */
	growers: z.number().optional().catch(undefined),
	events: z.number().optional().catch(undefined),
	/** The new closing time. */
	to: z.iso.datetime().optional().catch(undefined),
	/** A form's version, a release's number, and a report's address. */
	version: z.number().optional().catch(undefined),
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
	form: Words | null;
	stateFips: string | null;
	told: z.infer<typeof Told>;
};

export type LogPage = PageByKey<LoggedEvent> & { total: number; moreThanTotal: boolean };

const newestFirst: Order = {
	keys: [
		{ by: sql.ref("e.happened_at"), kind: "instant" },
		{ by: sql.ref("e.event_id"), kind: "int8" },
	],
	direction: "desc",
};

/** A page of what was done, newest first. */
export async function listEvents(trx: Trx, viewer: Coordinator, query: LogQuery): Promise<LogPage> {
	const counted = await trx
		.selectFrom(
			selectEvents(trx, viewer, query)
				.select("e.event_id")
				.limit(countedTo + 1)
				.as("c"),
		)
		.select((eb) => eb.fn.countAll<number>().as("total"))
		.executeTakeFirstOrThrow();
	const page = await pageByKey(newestFirst, query, logPageSize, (part) => readEvents(trx, viewer, query, part));
	return {
		...page,
		rows: page.rows.map(toEvent),
		total: Math.min(counted.total, countedTo),
		moreThanTotal: counted.total > countedTo,
	};
}

/** All events of a filter, newest first, or undefined where they are more than a file may hold. */
export async function listAllEvents(
	trx: Trx,
	viewer: Coordinator,
	query: LogQuery,
	most: number,
): Promise<LoggedEvent[] | undefined> {
	const { rows, after } = await pageByKey(newestFirst, {}, most, (part) => readEvents(trx, viewer, query, part));
	return after === null ? rows.map(toEvent) : undefined;
}

async function readEvents(trx: Trx, viewer: Coordinator, query: LogQuery, part: PagePart) {
	// The page is found first; what its events are about is then looked up for those alone.
	const page = selectEvents(trx, viewer, query)
		.where(part.beyond)
		.select(["e.event_id", "e.happened_at", "e.person_id", "e.action", "e.subject_kind", "e.subject_id"])
		.select(["e.state_fips", "e.detail"])
		.orderBy(part.inOrder)
		.limit(part.limit);
	return (
		trx
			.selectFrom(page.as("e"))
			.leftJoin("auth.person as p", "p.person_id", "e.person_id")
			// A subject is told by kind and id as text, whatever table it lies in.
			.leftJoin("auth.access_request as r", (join) =>
				join
					.on("e.subject_kind", "=", "access_request")
					.on(sql`r.access_request_id::text`, "=", sql.ref("e.subject_id")),
			)
			.leftJoin("auth.person as a", "a.person_id", "r.person_id")
			.leftJoin("auth.person as g", (join) =>
				join.on("e.subject_kind", "=", "person").on(sql`g.person_id::text`, "=", sql.ref("e.subject_id")),
			)
			.leftJoin("collect.survey as s", (join) => join.on(sql`s.survey_id::text`, "=", surveyOfEvent))
			.select([
				"e.event_id",
				"e.happened_at",
				"p.display_name",
				"p.email",
				"e.action",
				sql<string | null>`coalesce(g.display_name, a.display_name)`.as("about"),
				"s.season",
				"s.title",
				discardedOfEvent.as("discarded"),
				formOfEvent.as("form"),
				"e.state_fips",
				"e.detail",
			])
			.select(part.place.as("place"))
			.orderBy(part.inOrder)
			.execute()
	);
}

/** The survey that an event is about, as text. */
const surveyOfEvent = sql<string | null>`case e.subject_kind
	when 'survey' then e.subject_id
	when 'release_draft' then (select d.survey_id::text from collect.release_draft d
		where d.release_draft_id::text = e.subject_id)
	when 'release' then (select r.series_id::text from release.release r where r.release_id::text = e.subject_id)
	when 'report' then (select r.series_id::text from publish.report b join release.release r using (release_id)
		where b.report_id::text = e.subject_id)
	else e.detail ->> 'surveyId' end`;

/** What a draft was called that is no more, as the event of its end kept it. */
const Discarded = z.object({ season: z.number(), title: Words });
const discardedOfEvent = sql<unknown>`case when e.subject_kind = 'survey' and s.survey_id is null then
	(select d.detail from log.event d where d.subject_id = e.subject_id and d.action = 'survey.discarded' limit 1) end`;

/** The newest title of the form that an event is about. */
const formOfEvent = sql<unknown>`case when e.subject_kind = 'form' then coalesce(
	(select v.definition -> 'title' from collect.form_version v where v.form_id::text = e.subject_id
		order by v.version desc limit 1),
	(select d.draft -> 'title' from collect.form_draft d where d.form_id::text = e.subject_id)) end`;

type EventRow = {
	event_id: number;
	happened_at: Date;
	display_name: string | null;
	email: string | null;
	action: string;
	about: string | null;
	season: number | null;
	title: unknown;
	discarded: unknown;
	form: unknown;
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
		survey:
			row.season === null
				? (Discarded.safeParse(row.discarded).data ?? null)
				: { season: row.season, title: Words.parse(row.title) },
		form: Words.safeParse(row.form).data ?? null,
		stateFips: row.state_fips,
		told: Told.parse(row.detail),
	};
}
