import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { CountQuery } from "./desk-lists.schema.ts";

const pageSize = 50;

export type CountyCount = {
	countyFips: string;
	countyName: string;
	stateFips: string;
	asked: number;
	answered: number;
	/** Answered of asked, 0 to 100. */
	share: number;
};
type Order = Pick<CountQuery, "sort" | "direction" | "page">;

/**
 * How many operations of each county were asked and have answered, in the viewer's states and as the frame was frozen.
 * Counties of the network are some hundreds, so all are counted and one page of them returned.
 */
export async function listCountyCounts(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ sort, direction, page }: Order,
) {
	const answered = sql<number>`coalesce(w.answered, 0)::int`;
	const share = sql<number>`100.0 * coalesce(w.answered, 0) / a.asked`;
	const column = { county: sql.ref("c.name"), state: sql.ref("s.name"), asked: sql.ref("a.asked"), answered, share };
	// Summed up first, each once: before the planner knows how many there are, it summed the answers again for each row joined.
	const rows: CountyCount[] = await trx
		.with(
			(cte) => cte("asked_of").materialized(),
			(db) =>
				db
					.selectFrom("collect.frame_count")
					.where("survey_id", "=", surveyId)
					.where("crop_key", "=", "all")
					.where("state_fips", "in", viewer.stateFips)
					.groupBy(["county_fips", "state_fips"])
					.having(sql`sum(operations)`, ">", 0)
					.select(["county_fips", "state_fips", sql<number>`sum(operations)::int`.as("asked")]),
		)
		.with(
			(cte) => cte("answered_of").materialized(),
			(db) =>
				db
					.selectFrom("collect.answered_count")
					.where("survey_id", "=", surveyId)
					.where("crop_key", "=", "all")
					.where("state_fips", "in", viewer.stateFips)
					.groupBy("county_fips")
					.select(["county_fips", sql<number>`sum(operations)`.as("answered")]),
		)
		.selectFrom("asked_of as a")
		.innerJoin("directory.county as c", "c.county_fips", "a.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "a.state_fips")
		.leftJoin("answered_of as w", "w.county_fips", "a.county_fips")
		.select([
			"a.county_fips as countyFips",
			"c.name as countyName",
			"a.state_fips as stateFips",
			"a.asked",
			answered.as("answered"),
			share.as("share"),
		])
		.orderBy(column[sort], direction)
		.orderBy("c.name")
		.orderBy("a.county_fips")
		.execute();
	const pageCount = Math.max(1, Math.ceil(rows.length / pageSize));
	const shown = Math.min(page, pageCount);
	return { rows: rows.slice((shown - 1) * pageSize, shown * pageSize), total: rows.length, page: shown, pageCount };
}
