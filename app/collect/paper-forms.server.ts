import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countRows, type Order, pageByKey } from "#app/lib/page-by-key.server.ts";
import { listPlantingsOf } from "./answer-rows.server.ts";
import { findSurveyForm } from "./forms.server.ts";
import type { PaperQuery } from "./paper-forms.schema.ts";
import { findSurvey, isId } from "./surveys.server.ts";
import { isWaitedFor } from "./waited-for.server.ts";

/** As many forms as are printed at once: each is a sheet or two, and a printer is fed with no more. */
const pageSize = 50;

/**
 * The paper forms of a survey: of one operation, or of all that have sent nothing in and have not said that they will not, by
 * state, county and name. Each has the plantings that the survey asks about.
 * @returns undefined for a survey or operation that is not of the viewer's states.
 */
export async function listPaperForms(
	trx: Trx,
	viewer: Associate,
	{ surveyId, operationId }: { surveyId: string; operationId?: string },
	query: PaperQuery,
) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition || (operationId !== undefined && !isId(operationId))) return undefined;
	const matching = selectForms(trx, viewer, surveyId)
		.$if(operationId !== undefined, (rows) => rows.where("f.operation_id", "=", operationId!))
		.$if(operationId === undefined, (rows) => rows.where(isWaitedFor))
		.$if(operationId === undefined && query.show === "no_address", (rows) =>
			rows.where(sql<boolean>`(o.email is null or o.email = '')`),
		);
	const inArea = operationId === undefined && query.area !== "all" ? liesIn(query.area) : null;
	const count = await countRows(trx, (most) =>
		matching
			.$if(inArea !== null, (rows) =>
				rows.innerJoin("directory.county as c", "c.county_fips", "f.county_fips").where(inArea!),
			)
			.select(sql.lit(1).as("one"))
			.limit(most),
	);
	if (operationId !== undefined && count.total === 0) return undefined;
	// County by county, as far as the page needs: to put 14,000 in order for its 50 took 70 ms.
	const page = await pageByKey(byPlace, query, pageSize, ({ beyond, reach, direction, inOrder, place, limit }) => {
		const here = matching
			.where(sql<boolean>`f.county_fips = k.county_fips`)
			.select(["f.operation_id as operationId", "o.name", "o.contact_name as contactName", "o.language"]);
		const first = trx.selectFrom(here.as("w")).selectAll("w").where(beyond).orderBy(inOrder).limit(limit);
		return trx
			.selectFrom(selectCounties(trx, viewer, direction, inArea).as("k"))
			.where(reach(2))
			.innerJoinLateral(first.as("w"), (join) => join.onTrue())
			.select(["w.operationId", "w.name", "w.contactName", "k.name as countyName", "k.county_fips as countyFips"])
			.select(["w.language", place.as("place")])
			.orderBy(inOrder)
			.limit(limit)
			.execute();
	});
	const plantings = await listPlantingsOf(
		trx,
		surveyId,
		page.rows.map((row) => row.operationId),
	);
	const forms = page.rows.map((row) => ({
		...row,
		language: row.language === "es" ? ("es" as const) : ("en" as const),
		plantings: plantings.get(row.operationId) ?? [],
	}));
	return { survey, definition, forms, ...count, before: page.before, after: page.after };
}
export type PaperForms = NonNullable<Awaited<ReturnType<typeof listPaperForms>>>;
export type PaperForm = PaperForms["forms"][number];

/** The places of a survey's growers in the viewer's states, with how many of each have not answered; those of none are left out. */
export function listPaperAreas(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.frame_count as f")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.leftJoin("directory.district as d", "d.district_key", "c.district_key")
		.where("f.survey_id", "=", surveyId)
		.where("f.crop_key", "=", "all")
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.disposition", "in", ["not_reached", "undeliverable", "reached", "partial"])
		.groupBy(["f.state_fips", "c.county_fips", "c.name", "d.district_key", "d.name"])
		.having(sql`sum(f.operations)`, ">", 0)
		.orderBy("f.state_fips")
		.orderBy("c.name")
		.select(["f.state_fips as stateFips", "c.county_fips as countyFips", "c.name as countyName"])
		.select(["d.district_key as districtKey", "d.name as districtName"])
		.select(sql<number>`sum(f.operations)::int`.as("operations"))
		.execute();
}
export type PaperArea = Awaited<ReturnType<typeof listPaperAreas>>[number];

/** A county's state or itself by its code, otherwise its district. */
function liesIn(area: string) {
	if (/^\d{2}$/.test(area)) return sql<boolean>`c.state_fips = ${area}`;
	if (/^\d{5}$/.test(area)) return sql<boolean>`c.county_fips = ${area}`;
	return sql<boolean>`c.district_key = ${area}`;
}

const byPlace: Order = {
	keys: [
		{ by: sql.ref("k.state"), kind: "text" },
		{ by: sql.ref("k.name"), kind: "text" },
		{ by: sql.ref("w.name"), kind: "text" },
		{ by: sql.ref("w.operationId"), kind: "uuid" },
	],
	direction: "asc",
};

/** Put in order by themselves, so that the planner can take the first and leave the rest. */
function selectCounties(
	trx: Trx,
	viewer: Associate,
	direction: Order["direction"],
	inArea: RawBuilder<boolean> | null,
) {
	return trx
		.selectFrom("directory.county as c")
		.innerJoin("directory.state as s", "s.state_fips", "c.state_fips")
		.where("c.state_fips", "in", viewer.stateFips)
		.$if(inArea !== null, (counties) => counties.where(inArea!))
		.select(["s.name as state", "c.name", "c.county_fips"])
		.orderBy("s.name", direction)
		.orderBy("c.name", direction);
}

function selectForms(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("o.status", "=", "active");
}
