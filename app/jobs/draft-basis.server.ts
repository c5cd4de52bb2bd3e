import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Holding } from "#app/protect/holdings.ts";
import { cellKey } from "#app/protect/protect.ts";
import type { Edition } from "#app/protect/revision.ts";

const Amounts = z.record(z.string(), z.number());

/** Keeps what a draft rests on, for revisions of what may become of it. The scope is the network's. */
export async function keepBasis(trx: Trx, releaseDraftId: string, holdings: readonly Holding[]): Promise<void> {
	const rows = holdings.map(({ owner, areaKey, cropKey, amounts, digest }) => ({
		owner_id: owner,
		county_fips: areaKey,
		crop_key: cropKey,
		amounts,
		digest: digest ?? "",
	}));
	// One parameter: thousands of rows stay under the protocol's limit of bound values.
	await sql`insert into collect.release_draft_holding (release_draft_id, owner_id, county_fips, crop_key, amounts, digest)
		select ${releaseDraftId}::uuid, * from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
		as h(owner_id uuid, county_fips text, crop_key text, amounts jsonb, digest text)`.execute(trx);
}

/**
 * Every release of a survey so far, withdrawn ones too: whoever saw its figures may have kept them.
 * @returns in the order of editions.
 * @throws {Error} as `listEditions` does.
 */
export async function listEarlierEditions(trx: Trx, surveyId: string): Promise<Edition[]> {
	const releases = await trx
		.selectFrom("release.release")
		.select(["release_id as releaseId", "number"])
		.where("series_id", "=", surveyId)
		.orderBy("edition")
		.execute();
	return listEditions(trx, releases);
}

/**
 * What these releases showed and the answers that each was made of, in their order.
 * @throws {Error} for a release of whose answers nothing was kept: no draft can be held against it.
 */
export async function listEditions(
	trx: Trx,
	releases: readonly { releaseId: string; number: number }[],
): Promise<Edition[]> {
	if (releases.length === 0) return [];
	const ids = releases.map(({ releaseId }) => releaseId);
	const cells = await trx
		.selectFrom("release.cell")
		.select(["release_id", "area_key", "crop_key"])
		.where("release_id", "in", ids)
		.where("status", "=", "shown")
		.execute();
	const rows = await trx
		.selectFrom("collect.release_draft_holding")
		.selectAll()
		.where("release_draft_id", "in", ids)
		.orderBy("owner_id")
		.orderBy("county_fips")
		.orderBy("crop_key")
		.execute();
	const shownBy = groupBy(cells, (cell) => cell.release_id);
	const heldBy = groupBy(rows, (row) => row.release_draft_id);
	return releases.map(({ releaseId, number }) => {
		const held = heldBy.get(releaseId);
		if (!held) throw new Error(`nothing was kept of the answers behind release ${number}`);
		return {
			name: String(number),
			shown: new Set((shownBy.get(releaseId) ?? []).map(({ area_key, crop_key }) => cellKey(area_key, crop_key))),
			holdings: held.map((row) => ({
				owner: row.owner_id,
				areaKey: row.county_fips,
				cropKey: row.crop_key,
				amounts: Amounts.parse(row.amounts),
				digest: row.digest,
			})),
		};
	});
}
