import { sql } from "kysely";
import type { AreaKind, CellLook } from "./cell.ts";
import { reader } from "./reader.server.ts";

/** What a release tells of a figure: a number, or the word that stands in its place. */
export type Told = { look: CellLook; value: number | null };
export type CellChange = {
	/** Null where the cell as a whole is told in another word and has no figure in either release. */
	measureKey: string | null;
	cropKey: string;
	areaKey: string;
	areaName: string;
	areaKind: AreaKind;
	stateFips: string | null;
	before: Told;
	after: Told;
};
type Row = Omit<CellChange, "before" | "after"> & {
	total: number;
	lookBefore: CellLook;
	lookAfter: CellLook;
	valueBefore: number | null;
	valueAfter: number | null;
};

/**
 * The figures that a release tells otherwise than the one before it, in the order of its files: another value, or another
 * word. Read as the reader, so that nothing of a withdrawn or withheld cell is in it.
 */
export async function listCellChanges(
	{ releaseId, previousId }: { releaseId: string; previousId: string },
	{ limit, offset = 0 }: { limit: number; offset?: number },
): Promise<{ changes: CellChange[]; total: number }> {
	const { rows } = await sql<Row>`
		with own as (${figuresTold(releaseId)}), previous as (${figuresTold(previousId)}),
		figure_changes as (
			select coalesce(o.position, p.position) as position, measure_key, crop_key, area_key,
				coalesce(o.kind, p.kind) as kind, coalesce(o.name, p.name) as name, coalesce(o.state_fips, p.state_fips) as state_fips,
				coalesce(p.look, 'no_figure') as look_before, p.value as value_before,
				coalesce(o.look, 'no_figure') as look_after, o.value as value_after
			from own o full join previous p using (measure_key, crop_key, area_key)
			where (coalesce(o.look, '') <> coalesce(p.look, '') or o.value is distinct from p.value)
				and (o.look in ('number', 'rough') or p.look in ('number', 'rough'))),
		cell_changes as (
			select -1 as position, null::text as measure_key, o.crop_key, o.area_key, a.kind, a.name, a.state_fips,
				p.status as look_before, null::float8 as value_before, o.status as look_after, null::float8 as value_after
			from (select * from release.cell where release_id = ${releaseId}) o
				join (select * from release.cell where release_id = ${previousId}) p using (crop_key, area_key)
				join release.area a on a.release_id = o.release_id and a.area_key = o.area_key
			where o.status <> p.status and o.status <> 'shown' and p.status <> 'shown')
		select measure_key as "measureKey", crop_key as "cropKey", area_key as "areaKey", name as "areaName", kind as "areaKind",
			state_fips as "stateFips", look_before as "lookBefore", value_before as "valueBefore", look_after as "lookAfter",
			value_after as "valueAfter", (count(*) over ())::int as total
		from (select * from figure_changes union all select * from cell_changes) changed
		order by position, measure_key, crop_key, kind, area_key limit ${limit} offset ${offset}`.execute(reader());
	const changes = rows.map(({ total: _total, lookBefore, lookAfter, valueBefore, valueAfter, ...cell }) => ({
		...cell,
		before: { look: lookBefore, value: valueBefore },
		after: { look: lookAfter, value: valueAfter },
	}));
	return { changes, total: rows[0]?.total ?? 0 };
}

/** Every measure of every cell with the look that `lookOf` gives it. */
const figuresTold = (releaseId: string) => sql`select m.position, m.measure_key, c.crop_key, c.area_key, a.kind, a.name,
		a.state_fips, f.value, case when c.status <> 'shown' then c.status when f.steadiness is null then 'no_figure'
			when f.steadiness = 'rough' or f.value is null then 'rough' else 'number' end as look
	from release.cell c
		join release.area a on a.release_id = c.release_id and a.area_key = c.area_key
		join release.measure m on m.release_id = c.release_id
		left join release.figure f on f.release_id = c.release_id and f.measure_key = m.measure_key
			and f.crop_key = c.crop_key and f.area_key = c.area_key
	where c.release_id = ${releaseId}`;
