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
	const asked = sql<number>`sum(f.operations)::int`;
	const answered = sql<number>`coalesce(a.answered, 0)::int`;
	const share = sql<number>`100.0 * coalesce(a.answered, 0) / sum(f.operations)`;
	const column = { county: sql.ref("c.name"), state: sql.ref("s.name"), asked, answered, share };
	const answers = trx
		.selectFrom("collect.answered_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", "all")
		.where("state_fips", "in", viewer.stateFips)
		.groupBy("county_fips")
		.select(["county_fips", sql<number>`sum(operations)`.as("answered")]);
	const rows: CountyCount[] = await trx
		.selectFrom("collect.frame_count as f")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "f.state_fips")
		.leftJoin(answers.as("a"), "a.county_fips", "f.county_fips")
		.where("f.survey_id", "=", surveyId)
		.where("f.crop_key", "=", "all")
		.where("f.state_fips", "in", viewer.stateFips)
		.groupBy(["f.county_fips", "f.state_fips", "c.name", "s.name", "a.answered"])
		.having(sql`sum(f.operations)`, ">", 0)
		.select([
			"f.county_fips as countyFips",
			"c.name as countyName",
			"f.state_fips as stateFips",
			asked.as("asked"),
			answered.as("answered"),
			share.as("share"),
		])
		.orderBy(column[sort], direction)
		.orderBy("c.name")
		.orderBy("f.county_fips")
		.execute();
	const pageCount = Math.max(1, Math.ceil(rows.length / pageSize));
	const shown = Math.min(page, pageCount);
	return { rows: rows.slice((shown - 1) * pageSize, shown * pageSize), total: rows.length, page: shown, pageCount };
}
