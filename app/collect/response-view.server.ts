import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { listAnswerLines } from "./answer-lines.ts";
import type { Answer } from "./form.ts";
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
	const answers = shown ? await listAnswers(trx, responseId, shown.version) : [];
	const plantings = await listPlantings(trx, response.operationId, answers);
	return {
		...response,
		mode: response.mode as "web" | "telephone" | "paper",
		language: response.language as "en" | "es",
		submissions,
		shownVersion: shown?.version ?? null,
		groups: shown ? listAnswerLines(definition, plantings, answers) : [],
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

async function listAnswers(trx: Trx, responseId: string, version: number): Promise<Answer[]> {
	const { answers } = await trx
		.selectFrom("collect.submission")
		.select("answers")
		.where("response_id", "=", responseId)
		.where("version", "=", version)
		.executeTakeFirstOrThrow();
	return answers as Answer[];
}

/** The plantings that the answers tell of, also those taken out since; what was planted later was not asked about. */
async function listPlantings(trx: Trx, operationId: string, answers: Answer[]): Promise<PlantingAsked[]> {
	const ids = [...new Set(answers.flatMap((answer) => answer.plantingId ?? []))];
	const rows = await trx
		.selectFrom("directory.planting as p")
		.innerJoin("directory.crop as c", "c.crop_key", "p.crop_key")
		.where("p.operation_id", "=", operationId)
		.where((eb) => eb("p.planting_id", "=", eb.fn.any(eb.val(ids))))
		.select([
			"p.planting_id as plantingId",
			"p.crop_key as cropKey",
			"p.cultivar",
			"p.bearing_trees as bearingTrees",
			"c.plant_kind as plantKind",
			"c.bushel_lb as bushelLb",
		])
		.orderBy("c.position")
		.orderBy("p.cultivar")
		.orderBy("p.planting_id")
		.execute();
	return rows.map((row) => ({ ...row, plantKind: row.plantKind as PlantingAsked["plantKind"] }));
}
