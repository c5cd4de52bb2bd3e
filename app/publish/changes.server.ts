import { sql } from "kysely";
import { reader } from "./reader.server.ts";

/** How the numbers of an edition differ from those of the one before it: counts only, each figure on its own. */
export type EditionChanges = { same: number; changed: number; shown: number; hidden: number };

/** Null when there is nothing to compare: a first edition, or one of the two is withdrawn. */
export async function findChanges(releaseId: string, previousId: string | null): Promise<EditionChanges | null> {
	if (!previousId) return null;
	const { rows } = await sql<EditionChanges & { own: number; previous: number }>`
		select count(o.value) as own, count(p.value) as previous,
			count(*) filter (where o.value = p.value) as same,
			count(*) filter (where o.value <> p.value) as changed,
			count(*) filter (where o.value is not null and p.value is null) as shown,
			count(*) filter (where o.value is null and p.value is not null) as hidden
		from (select measure_key, crop_key, area_key, value from release.figure where release_id = ${releaseId}) o
			full join (select measure_key, crop_key, area_key, value from release.figure where release_id = ${previousId}) p
			using (measure_key, crop_key, area_key)`.execute(reader());
	const counted = rows[0];
	if (!counted || counted.own === 0 || counted.previous === 0) return null;
	const { same, changed, shown, hidden } = counted;
	return { same, changed, shown, hidden };
}
