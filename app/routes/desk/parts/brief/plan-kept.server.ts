import type { Trx } from "#app/auth/scope.server.ts";
import { holdAgainst, type Kept, type PlannedFigure } from "#app/collect/brief.ts";
import { ReleaseMethod } from "#app/release/draft.ts";
import { listDraftCells } from "#app/release/drafts.server.ts";

/** What the newest release of a survey that was not withdrawn made of each planned figure; null before there is one. */
export async function readPlanKept(
	trx: Trx,
	surveyId: string,
	planned: readonly PlannedFigure[],
): Promise<{ number: number; kept: Kept[] } | null> {
	const release = await trx
		.selectFrom("release.release as r")
		.innerJoin("collect.release_draft as d", "d.release_draft_id", "r.release_id")
		.leftJoin("release.withdrawal as w", "w.release_id", "r.release_id")
		.select(["r.release_id", "r.number", "d.method"])
		.where("r.series_id", "=", surveyId)
		.where("w.release_id", "is", null)
		.orderBy("r.edition", "desc")
		.limit(1)
		.executeTakeFirst();
	if (!release) return null;
	const { areas } = ReleaseMethod.parse(release.method);
	const levelOf = new Map(areas.map(({ areaKey, kind }) => [areaKey, kind] as const));
	const cells = await listDraftCells(trx, release.release_id);
	return { number: release.number, kept: planned.map((one) => holdAgainst(one, cells, levelOf)) };
}
