import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import {
	type Counted,
	countRows,
	type Order,
	pageByParts,
	type PagePart,
	type SortKey,
} from "#app/lib/page-by-key.server.ts";
import { searchPattern } from "#app/lib/search-pattern.ts";
import type { FrameQuery } from "./desk-lists.schema.ts";
import { listMails, type Mail } from "./mail-list.server.ts";

const pageSize = 50;
/** All on one page is for paper; no state's frame is larger. */
const largestPage = 5_000;

/** `reached`: spoken to, and no answer yet. */
export type Disposition =
	"complete" | "partial" | "refused" | "reached" | "not_reached" | "undeliverable" | "not_eligible";
export type FrameRow = {
	operationId: string;
	name: string;
	contactName: string;
	phone: string | null;
	email: string | null;
	countyName: string;
	statePostal: string;
	disposition: Disposition;
	/** Set once the grower has begun, sent in or not. */
	responseId: string | null;
	submittedAt: Date | null;
	/** Set where the grower took the answers back, and has not sent in again. */
	withdrawnAt: Date | null;
	/** What was mailed to it for this survey, oldest first. */
	mails: Mail[];
};

/** The one place that says whose rows of a survey's frame an associate can see. */
function selectFrame(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "f.state_fips")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips);
}

/** A page of a survey's growers, those of equal sort values by id. */
export async function listFrame(trx: Trx, viewer: Associate, surveyId: string, query: FrameQuery) {
	const matching = matchingFrame(trx, viewer, surveyId, query);
	const count = await countFrame(trx, viewer, surveyId, query);
	const size = query.all ? largestPage : pageSize;
	const parts = partsOf(query).map(({ order, those }) => ({
		order,
		read: ({ beyond, inOrder, place, limit }: PagePart) =>
			matching
				.where(those)
				.where(beyond)
				.select(frameColumns)
				.select(place.as("place"))
				.orderBy(inOrder)
				.limit(limit)
				.execute(),
	}));
	const page = await pageByParts(parts, query, size);
	// Mails are looked up for the rows shown: joined above, they would be for every grower of the frame.
	const mails = await listMails(
		trx,
		surveyId,
		page.rows.map((row) => row.operationId),
	);
	return { ...page, rows: page.rows.map((row) => toRow(row, mails.get(row.operationId))), ...count };
}

/** What is kept is told exactly: a frame whole, and who has answered or not; other parts as far as they are counted. */
async function countFrame(trx: Trx, viewer: Associate, surveyId: string, query: FrameQuery): Promise<Counted> {
	const { q, show } = query;
	if (q === "" && (show === "all" || show === "answered" || show === "not_answered")) {
		const { asked, answered } = await readKeptCounts(trx, viewer, surveyId);
		const total = { all: asked, answered, not_answered: asked - answered }[show];
		return { total, moreThanTotal: false };
	}
	const matching = matchingFrame(trx, viewer, surveyId, query);
	return countRows(trx, (most) => matching.select(sql.lit(1).as("one")).limit(most));
}

async function readKeptCounts(trx: Trx, viewer: Associate, surveyId: string) {
	const sum = (table: "collect.frame_count" | "collect.answered_count") =>
		trx
			.selectFrom(table)
			.where("survey_id", "=", surveyId)
			.where("crop_key", "=", "all")
			.where("state_fips", "in", viewer.stateFips)
			.select(sql<number>`coalesce(sum(operations), 0)::int`.as("n"));
	const { rows } = await sql<{ asked: number; answered: number }>`
		select (${sum("collect.frame_count")}) as asked, (${sum("collect.answered_count")}) as answered`.execute(trx);
	return rows[0]!;
}

const frameColumns = [
	"f.operation_id as operationId",
	"o.name",
	"o.contact_name as contactName",
	"o.phone",
	"o.email",
	"c.name as countyName",
	"s.postal as statePostal",
	"f.disposition",
	"r.response_id as responseId",
	"r.submitted_at as submittedAt",
	"r.withdrawn_at as withdrawnAt",
] as const;

/** From done to out of reach, as one works through the list. */
const dispositions = [
	"complete",
	"partial",
	"reached",
	"not_reached",
	"undeliverable",
	"refused",
	"not_eligible",
] as const satisfies Disposition[];
const byId = { by: sql.ref("f.operation_id"), kind: "uuid" } as const;
const everybody = sql<boolean>`true`;

/**
 * The list as parts one after another, each read off an index: put in order whole by when they answered, or by what became of
 * them, 50,000 took 80 ms a page.
 */
function partsOf({ sort, direction }: FrameQuery): { order: Order; those: RawBuilder<boolean> }[] {
	const inOrder = (...keys: SortKey[]) => ({ keys, direction });
	if (sort === "answered") {
		const answered = [
			{ by: sql.ref("r.submitted_at"), kind: "instant" },
			{ by: sql.ref("r.operation_id"), kind: "uuid" },
		] as const;
		// Who has not answered comes last either way.
		return [
			{ order: inOrder(...answered), those: sql`r.submitted_at is not null` },
			{ order: inOrder(byId), those: sql`r.submitted_at is null` },
		];
	}
	if (sort === "disposition")
		return (direction === "asc" ? dispositions : dispositions.toReversed()).map((disposition) => ({
			order: inOrder(byId),
			those: sql`f.disposition = ${disposition}`,
		}));
	const name = sql.ref(sort === "name" ? "o.name" : "c.name");
	return [{ order: inOrder({ by: name, kind: "text" }, byId), those: everybody }];
}

function matchingFrame(trx: Trx, viewer: Associate, surveyId: string, { q, show }: FrameQuery) {
	const pattern = searchPattern(q);
	return selectFrame(trx, viewer, surveyId)
		.$if(q !== "", (rows) =>
			rows.where((eb) => eb.or([eb("o.name", "~*", pattern), eb("o.contact_name", "~*", pattern)])),
		)
		.$if(show === "answered", (rows) => rows.where("r.submitted_at", "is not", null))
		.$if(show === "not_answered" || show === "no_address", (rows) => rows.where("r.submitted_at", "is", null))
		.$if(show === "no_address", (rows) =>
			rows.where(sql<boolean>`(o.email is null or o.email = '') and o.left_at is null`),
		)
		.$if(show === "mail_returned", (rows) =>
			rows.where(sql<boolean>`f.operation_id = any (array(select m.operation_id from collect.mailing m
					where m.survey_id = ${surveyId} and m.failure = 'returned'))
				and (select m.failure from collect.mailing m
					where m.survey_id = f.survey_id and m.operation_id = f.operation_id
					order by m.queued_at desc, m.mailing_id desc limit 1) = 'returned'`),
		);
}

function toRow<T extends { disposition: string }>(row: T, mails: Mail[] = []) {
	return { ...row, disposition: row.disposition as Disposition, mails };
}
