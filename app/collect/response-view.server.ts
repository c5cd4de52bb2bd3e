import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listAnswerLines } from "./answer-lines.ts";
import type { Submission } from "./answer-rows.server.ts";
import { findSurveyForm } from "./forms.server.ts";
import type { PlantingAsked } from "./steps.ts";
import { isId } from "./surveys.server.ts";

/**
 * One operation's answers as they were sent in, question by question; before that only that they were begun, since a
 * draft's answers are the grower's own.
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
	const submissions = await trx
		.selectFrom("collect.submission")
		.select(["version", "submitted_at as submittedAt"])
		.where("response_id", "=", responseId)
		.orderBy("version", "desc")
		.execute();
	const shown = submissions.find((submission) => submission.version === version) ?? submissions[0];
	const submission = shown && (await getSubmission(trx, responseId, shown.version));
	return {
		...response,
		mode: response.mode as "web" | "telephone" | "paper",
		language: response.language as "en" | "es",
		submissions,
		shownVersion: shown?.version ?? null,
		groups: submission ? listAnswerLines(definition, await listPlantings(trx, submission), submission.answers) : [],
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
		]);
}

async function getSubmission(trx: Trx, responseId: string, version: number): Promise<Submission> {
	const { answers } = await trx
		.selectFrom("collect.submission")
		.select("answers")
		.where("response_id", "=", responseId)
		.where("version", "=", version)
		.executeTakeFirstOrThrow();
	return answers as Submission;
}

/** The plantings that were asked about then, with the crops they had, also those taken out since; none planted later. */
async function listPlantings(trx: Trx, { plantings }: Submission): Promise<PlantingAsked[]> {
	const ids = plantings.map(({ plantingId }) => plantingId);
	const rows = await trx
		.selectFrom("directory.planting")
		.select(["planting_id", "cultivar", "bearing_trees"])
		.where((eb) => eb("planting_id", "=", eb.fn.any(eb.val(ids))))
		.execute();
	const crops = await trx.selectFrom("directory.crop").select(["crop_key", "plant_kind", "bushel_lb"]).execute();
	return plantings.map(({ plantingId, cropKey }) => {
		const row = rows.find((planting) => planting.planting_id === plantingId);
		const crop = crops.find(({ crop_key }) => crop_key === cropKey);
		return {
			plantingId,
			cropKey,
			cultivar: row?.cultivar ?? "",
			bearingTrees: row?.bearing_trees ?? 0,
			plantKind: crop?.plant_kind === "bush" ? "bush" : "tree",
			bushelLb: crop?.bushel_lb ?? null,
		};
	});
}
