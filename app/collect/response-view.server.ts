import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findSurveyForm } from "./forms.server.ts";
import { viewSubmissions } from "./submission-view.server.ts";
import { isId } from "./surveys.server.ts";

/**
 * One operation's answers as they were sent in, question by question; before that only that they were begun, since a
 * draft's answers are the grower's own, and so are those that the grower withdrew.
 * @param version which time they were sent in; without it, or where there is no such, the newest.
 * @returns undefined outside the viewer's states, and for a response to another survey.
 */
export async function findResponse(
	trx: Trx,
	viewer: Associate,
	{ surveyId, responseId }: { surveyId: string; responseId: string },
	version?: number,
) {
	if (!isId(surveyId) || !isId(responseId)) return undefined;
	const response = await selectResponse(trx, viewer)
		.where("r.response_id", "=", responseId)
		.where("r.survey_id", "=", surveyId)
		.executeTakeFirst();
	const definition = response && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	return {
		...response,
		mode: response.mode as "web" | "telephone" | "paper",
		language: response.language as "en" | "es",
		...(await viewSubmissions(trx, definition, responseId, { version, withdrawn: false })),
	};
}

/** The one place that says whose answers an associate can see. */
function selectResponse(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("collect.response as r")
		.innerJoin("directory.operation as o", "o.operation_id", "r.operation_id")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "r.survey_id").onRef("f.operation_id", "=", "r.operation_id"),
		)
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "f.state_fips")
		.where("r.state_fips", "in", viewer.stateFips)
		.select([
			"r.response_id as responseId",
			"r.operation_id as operationId",
			"o.name as operationName",
			"o.contact_name as contactName",
			"c.name as countyName",
			"s.postal as statePostal",
			"s.time_zone as timeZone",
			"r.mode",
			"r.language",
			"r.pledge_version as pledgeVersion",
			"r.pledged_at as pledgedAt",
			"r.receipt_code as receiptCode",
			"r.started_at as startedAt",
			"r.withdrawn_at as withdrawnAt",
		]);
}
