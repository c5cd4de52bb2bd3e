import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Words } from "./form.ts";

export type FrozenFrame = Awaited<ReturnType<typeof listFrozenFrames>>[number];

/** The surveys under way that ask one operation, with the crops and bearing trees that it had when their frames were frozen. */
export async function listFrozenFrames(trx: Trx, viewer: Associate, operationId: string) {
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.survey as s", "s.survey_id", "f.survey_id")
		.innerJoin("collect.frame_crop as c", (join) =>
			join.onRef("c.survey_id", "=", "f.survey_id").onRef("c.operation_id", "=", "f.operation_id"),
		)
		.innerJoin("directory.crop as k", "k.crop_key", "c.crop_key")
		.where("f.operation_id", "=", operationId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.disposition", "<>", "not_eligible")
		.where(sql<boolean>`s.closed_at is null and s.closes_at > now()`)
		.select(["s.survey_id as surveyId", "s.season", "s.title", "c.crop_key as cropKey"])
		.select("c.bearing_trees as bearingTrees")
		.orderBy("s.season", "desc")
		.orderBy("s.survey_id")
		.orderBy("k.position")
		.execute();
	const bySurvey = groupBy(rows, ({ surveyId }) => surveyId);
	return [...bySurvey.entries()].map(([surveyId, of]) => ({
		surveyId,
		season: of[0]!.season,
		title: of[0]!.title as Words,
		crops: of.map(({ cropKey, bearingTrees }) => ({ cropKey, bearingTrees })),
	}));
}
