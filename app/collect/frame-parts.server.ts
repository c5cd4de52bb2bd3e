import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type SizeClass, sizeClassFrom } from "./frame.ts";

/** Operations of one state and size class that a survey asks, with the bearing trees of its crops. */
export type FramePart = { stateFips: string; sizeClass: SizeClass; operations: number; bearingTrees: number };
type FrameOf = { surveyId: string; state: string; stateFips: string[]; cropKeys: string[] };

/** Who is in a survey's frame, in the viewer's states; of a draft, who would be if it were opened now. */
export function listFrameParts(trx: Trx, viewer: Associate, survey: FrameOf): Promise<FramePart[]> {
	return survey.state === "draft" ? listEligible(trx, viewer, survey) : listFrozen(trx, viewer, survey.surveyId);
}

function listFrozen(trx: Trx, viewer: Associate, surveyId: string): Promise<FramePart[]> {
	return trx
		.selectFrom("collect.frame_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", "all")
		.where("state_fips", "in", viewer.stateFips)
		.groupBy(["state_fips", "size_class"])
		.having(sql`sum(operations)`, ">", 0)
		.select(["state_fips as stateFips", sql<SizeClass>`size_class`.as("sizeClass")])
		.select(sql<number>`sum(operations)::int`.as("operations"))
		.select(sql<number>`sum(bearing_trees)::float8`.as("bearingTrees"))
		.execute();
}

/** As `freezeFrame` chooses, counted. */
async function listEligible(trx: Trx, viewer: Associate, { stateFips, cropKeys }: FrameOf): Promise<FramePart[]> {
	const { rows } = await sql<FramePart>`
		select state_fips as "stateFips", case when trees < ${sizeClassFrom.medium} then 'small'
			when trees < ${sizeClassFrom.large} then 'medium' else 'large' end as "sizeClass",
			count(*)::int as operations, sum(trees)::float8 as "bearingTrees"
		from (select o.state_fips, o.operation_id, sum(p.bearing_trees)::int as trees
			from directory.operation o join directory.planting p on p.operation_id = o.operation_id
			where o.status = 'active' and o.rehearsal_id is null and o.state_fips = any (${stateFips})
				and o.state_fips = any (${viewer.stateFips}) and p.crop_key = any (${cropKeys}) and p.removed_on is null
			group by o.state_fips, o.operation_id) t
		group by 1, 2`.execute(trx);
	return rows;
}

/** Active growers of a draft's states who have none of its crops, and would not be asked. */
export async function countLeftOut(trx: Trx, viewer: Associate, { stateFips, cropKeys }: FrameOf): Promise<number> {
	const { rows } = await sql<{ n: number }>`select count(*)::int as n from directory.operation o
		where o.status = 'active' and o.rehearsal_id is null and o.state_fips = any (${stateFips})
			and o.state_fips = any (${viewer.stateFips}) and not exists (select from directory.planting p
				where p.operation_id = o.operation_id and p.crop_key = any (${cropKeys}) and p.removed_on is null)`.execute(trx);
	return rows[0]!.n;
}
