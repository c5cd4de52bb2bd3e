import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";

/** Which version of the pledge an operation agreed to for which survey, newest first. */
export async function listOwnConsents(trx: Trx, viewer: Grower, operationId: string) {
	if (viewer.link || !viewer.operationIds.includes(operationId)) return [];
	const rows = await trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.survey as s", "s.survey_id", "r.survey_id")
		.innerJoin("directory.state as z", "z.state_fips", "r.state_fips")
		.where("r.operation_id", "=", operationId)
		.select([
			"s.survey_id as surveyId",
			"s.season",
			"s.title",
			"r.pledge_version as pledgeVersion",
			"r.pledged_at as pledgedAt",
			"z.time_zone as timeZone",
		])
		.orderBy("r.pledged_at", "desc")
		.orderBy("s.survey_id")
		.execute();
	return rows.map((row) => ({ ...row, title: row.title as Words }));
}
