import { Client } from "pg";
import { type County, listCounties } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";

export const measures = 10;

/**
 * A release of one crop in every county of the states with ten measures, as the owner of the tables writes it: every tenth
 * county is withheld, and every twentieth figure is too rough.
 * @param counties others than all.
 * @returns how many cells it tells, each measure counted.
 */
export async function addLargeRelease(
	ownerUrl: string,
	counties: County[] = listCounties(usTopology()),
): Promise<{ releaseId: string; number: number; rows: number }> {
	const owner = new Client({ connectionString: ownerUrl });
	await owner.connect();
	try {
		await owner.query("alter table release.release disable trigger release_of_audited_draft");
		await owner.query("alter table release.cell disable trigger cell_as_audited");
		const { rows } = await owner.query<{ release_id: string; number: number }>(release, [words]);
		const { release_id: releaseId, number } = rows[0]!;
		await owner.query(areas, [releaseId, JSON.stringify(counties)]);
		await owner.query(measuresOf, [releaseId, words, measures]);
		await owner.query(cells, [releaseId]);
		await owner.query(figures, [releaseId]);
		await owner.query("alter table release.release enable trigger release_of_audited_draft");
		await owner.query("alter table release.cell enable trigger cell_as_audited");
		await owner.query("vacuum analyze");
		const told = await owner.query("select from release.cell where release_id = $1", [releaseId]);
		return { releaseId, number, rows: told.rowCount! * measures };
	} finally {
		await owner.end();
	}
}

const words = JSON.stringify({ en: "After harvest", es: "Después de la cosecha" });

const release = `insert into release.release
		(release_id, season, form_key, title, rules, method, audit, code_version, checksum, series_id)
	values (gen_random_uuid(), 2031, 'after_harvest', $1, '{"minimumOwners": 5}', '{}', '{}', 'bench', 'sum', gen_random_uuid())
	returning release_id, number`;

const areas = `with county as (select * from jsonb_to_recordset($2::jsonb) as c("countyFips" text, "stateFips" text, name text, "stateName" text))
	insert into release.area (release_id, area_key, kind, parent_key, state_fips, name)
	select $1::uuid, 'network', 'region', null, null, 'All states'
	union all select distinct $1::uuid, "stateFips", 'state', 'network', "stateFips", "stateName" from county
	union all select $1::uuid, "countyFips", 'county', "stateFips", "stateFips", name from county`;

const measuresOf = `insert into release.measure (release_id, measure_key, position, label, description, kind, unit, decimals, worse, hue)
	select $1::uuid, 'measure_' || n, n, $2::jsonb, $2::jsonb, 'ratio', 'percent', 1, 'more', 'loss' from generate_series(1, $3::int) n`;

const cells = `insert into release.cell (release_id, crop_key, area_key, status, respondents_band)
	select $1::uuid, 'apple', area_key, case when withheld then 'withheld' else 'shown' end, case when not withheld then '10-19' end
	from (select area_key, kind = 'county' and row_number() over (order by area_key) % 10 = 0 as withheld
		from release.area where release_id = $1::uuid) a`;

const figures = `insert into release.figure
		(release_id, measure_key, crop_key, area_key, value, standard_error, cv, lower_bound, upper_bound, steadiness)
	select $1::uuid, measure_key, crop_key, area_key, v, s, s / v, v - 2 * s, v + 2 * s, steadiness
	from (select measure_key, crop_key, area_key, steadiness, case when steadiness <> 'rough' then round((random() * 90 + 5)::numeric, 1)::float8 end as v,
			case when steadiness <> 'rough' then 1.25 end as s
		from (select m.measure_key, c.crop_key, c.area_key, case when random() < 0.05 then 'rough' else 'steady' end as steadiness
			from release.cell c join release.measure m using (release_id)
			where c.release_id = $1::uuid and c.status = 'shown') f) f`;
