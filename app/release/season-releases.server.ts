import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";

export interface SeasonRelease {
	releaseId: string;
	number: number;
	surveyId: string;
}

/**
 * Every release of another survey of the same season and of at least one of the same states, withdrawn and replaced ones
 * too: what growers told twice can be read in both. A draft is held against all of them.
 */
export async function listSeasonReleases(trx: Trx, surveyId: string): Promise<SeasonRelease[]> {
	const rows = await trx
		.selectFrom("release.release as r")
		.innerJoin("collect.survey as s", "s.season", "r.season")
		.select(["r.release_id", "r.number", "r.series_id"])
		.where("s.survey_id", "=", surveyId)
		.where("r.series_id", "!=", surveyId)
		.where(
			sql<boolean>`exists (select from collect.survey_state here join collect.survey_state there using (state_fips)
				where here.survey_id = s.survey_id and there.survey_id = r.series_id)`,
		)
		.orderBy("r.number")
		.execute();
	return rows.map((row) => ({ releaseId: row.release_id, number: row.number, surveyId: row.series_id }));
}

/**
 * Whether a draft was held against every such release that there is now. Of two drafts that were made at once, the one
 * that is published second has to be made again: it takes the season's lock, so that it sees the first.
 */
export async function isUpToDate(trx: Trx, surveyId: string, heldAgainst: readonly string[]): Promise<boolean> {
	await sql`select pg_advisory_xact_lock(hashtextextended('releases of season ' || season, 0))
		from collect.survey where survey_id = ${surveyId}`.execute(trx);
	const known = new Set(heldAgainst);
	return (await listSeasonReleases(trx, surveyId)).every(({ releaseId }) => known.has(releaseId));
}
