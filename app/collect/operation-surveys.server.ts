import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Words } from "./form.ts";
import type { Disposition } from "./frame-list.server.ts";
import { listMails } from "./mail-list.server.ts";

export type OperationSurvey = Awaited<ReturnType<typeof listOperationSurveys>>[number];

/** The surveys that asked one operation, newest season first: what came back, and what was mailed for each. */
export async function listOperationSurveys(trx: Trx, viewer: Associate, operationId: string) {
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "f.survey_id").onRef("r.operation_id", "=", "f.operation_id"),
		)
		.where("f.operation_id", "=", operationId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select([
			"s.survey_id as surveyId",
			"s.season",
			"s.title",
			sql<boolean>`s.closed_at is null and s.closes_at > now()`.as("isOpen"),
			"f.disposition",
			"r.response_id as responseId",
			"r.submitted_at as submittedAt",
			"r.withdrawn_at as withdrawnAt",
		])
		.orderBy("s.season", "desc")
		.orderBy("s.created_at", "desc")
		.execute();
	const surveys = [];
	for (const row of rows) {
		const mails = (await listMails(trx, row.surveyId, [operationId])).get(operationId) ?? [];
		const invited = mails.filter(({ kind }) => kind === "invitation" || kind === "new_link");
		surveys.push({
			...row,
			title: row.title as Words,
			disposition: row.disposition as Disposition,
			mails,
			/** The wave that a link sent now would be: sent back with the button, so that a second press sends nothing. */
			linkWave: Math.max(0, ...invited.map((mail) => mail.wave)) + 1,
		});
	}
	return surveys;
}
