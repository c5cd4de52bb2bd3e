import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countRows, type Order, pageByKey } from "#app/lib/page-by-key.server.ts";
import { listPlantingsOf } from "./answer-rows.server.ts";
import { findSurveyForm } from "./forms.server.ts";
import type { PaperQuery } from "./paper-forms.schema.ts";
import { findSurvey, isId } from "./surveys.server.ts";
import { isWaitedFor } from "./waited-for.server.ts";

/** As many forms as a page of the list holds: each is a sheet or two. */
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
		.$if(operationId === undefined && query.state !== "all", (rows) => rows.where("f.state_fips", "=", query.state))
		.$if(operationId === undefined && query.show === "no_address", (rows) =>
			rows.where(sql<boolean>`coalesce(o.email, '') = ''`),
		);
	const count = await countRows(trx, (most) => matching.select(sql.lit(1).as("one")).limit(most));
	if (operationId !== undefined && count.total === 0) return undefined;
	const page = await pageByKey(byPlace, query, pageSize, ({ beyond, inOrder, place, limit }) =>
		matching
			.where(beyond)
			.select(["f.operation_id as operationId", "o.name", "o.contact_name as contactName", "c.name as countyName"])
			.select(["c.county_fips as countyFips", "o.language", place.as("place")])
			.orderBy(inOrder)
			.limit(limit)
			.execute(),
	);
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

const byPlace: Order = {
	keys: [
		{ by: sql.ref("s.name"), kind: "text" },
		{ by: sql.ref("c.name"), kind: "text" },
		{ by: sql.ref("o.name"), kind: "text" },
		{ by: sql.ref("f.operation_id"), kind: "uuid" },
	],
	direction: "asc",
};

function selectForms(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "f.state_fips")
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("o.status", "=", "active");
}
