import { createHash } from "node:crypto";
import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { type DistrictNames, districtsOf } from "./districts.ts";

export type StateDistricts = {
	stateFips: string;
	counties: { countyFips: string; name: string; district: string | null }[];
	/** Which counties share a border, those of other states left out. */
	neighborsOf: Map<string, string[]>;
	/** Changes with every change of the districts. */
	version: number;
	lastChange: { changedBy: string; changedAt: Date } | null;
};

/** Associates group the counties of their states; a coordinator, under the scope of a state, those of every state. */
const reaches = (viewer: Associate | Coordinator, stateFips: string) =>
	viewer.role === "coordinator" || viewer.stateFips.includes(stateFips);

const Before = z.array(z.tuple([z.string(), z.string().nullable()]));

/** How the counties of a state are grouped, or undefined where the state is not the viewer's. */
export async function findStateDistricts(
	trx: Trx,
	viewer: Associate | Coordinator,
	stateFips: string,
): Promise<StateDistricts | undefined> {
	if (!reaches(viewer, stateFips)) return undefined;
	const counties = await trx
		.selectFrom("directory.county as c")
		.leftJoin("directory.district as d", "d.district_key", "c.district_key")
		.select(["c.county_fips as countyFips", "c.name", "d.name as district"])
		.where("c.state_fips", "=", stateFips)
		.orderBy("c.name")
		.execute();
	if (counties.length === 0) return undefined;
	const last = await findLastChange(trx, stateFips);
	return {
		stateFips,
		counties,
		neighborsOf: await listNeighborsOf(trx, stateFips),
		version: last?.district_change_id ?? 0,
		lastChange: last ? { changedBy: last.display_name, changedAt: last.changed_at } : null,
	};
}

async function listNeighborsOf(trx: Trx, stateFips: string): Promise<Map<string, string[]>> {
	const { rows } = await sql<{ county: string; neighbors: string[] }>`
		select n.county_fips as county, array_agg(n.neighbor_fips order by n.neighbor_fips) as neighbors
		from directory.county_neighbor n
		where left(n.county_fips, 2) = ${stateFips} and left(n.neighbor_fips, 2) = ${stateFips}
		group by n.county_fips`.execute(trx);
	return new Map(rows.map(({ county, neighbors }) => [county, neighbors]));
}

function findLastChange(trx: Trx, stateFips: string) {
	return trx
		.selectFrom("directory.district_change as c")
		.innerJoin("auth.person as p", "p.person_id", "c.changed_by")
		.select(["c.district_change_id", "c.before", "c.changed_at", "p.display_name"])
		.where("c.state_fips", "=", stateFips)
		.orderBy("c.district_change_id", "desc")
		.limit(1)
		.executeTakeFirst();
}

export type Redrawn = "redrawn" | "unchanged" | "changed_meanwhile" | "not_found";

/**
 * Groups a state's counties anew, for drafts to come. A group of other counties than before is another district with a key of
 * its own, even under the same name: figures of two seasons are never compared as of one area where they are not.
 * @param seen the version that was shown when the grouping was made; a change by somebody else since is not written over.
 */
export async function redrawDistricts(
	trx: Trx,
	viewer: Associate | Coordinator,
	{ stateFips, names, seen }: { stateFips: string; names: DistrictNames; seen: number },
): Promise<Redrawn> {
	if (!reaches(viewer, stateFips)) return "not_found";
	await sql`select pg_advisory_xact_lock(hashtextextended(${`districts ${stateFips}`}, 0))`.execute(trx);
	const now = await findStateDistricts(trx, viewer, stateFips);
	if (!now) return "not_found";
	if (now.version !== seen) return "changed_meanwhile";
	const before = now.counties.map(({ countyFips, district }) => [countyFips, district] as const);
	if (before.every(([county, district]) => (names.get(county) ?? null) === district)) return "unchanged";
	await trx
		.insertInto("directory.district_change")
		.values({ state_fips: stateFips, before: JSON.stringify(before), changed_by: viewer.personId })
		.execute();
	await writeDistricts(trx, stateFips, names);
	return "redrawn";
}

/** Takes the last change of a state's districts back, which is one more change. */
export async function undoRedrawing(
	trx: Trx,
	viewer: Associate | Coordinator,
	stateFips: string,
	seen: number,
): Promise<Redrawn> {
	if (!reaches(viewer, stateFips)) return "not_found";
	const last = await findLastChange(trx, stateFips);
	if (!last) return "not_found";
	const names = new Map(Before.parse(last.before).flatMap(([county, name]) => (name === null ? [] : [[county, name]])));
	return redrawDistricts(trx, viewer, { stateFips, names, seen });
}

async function writeDistricts(trx: Trx, stateFips: string, names: DistrictNames): Promise<void> {
	const { rows: present } = await sql<{ key: string; counties: string[] }>`
		select district_key as key, array_agg(county_fips order by county_fips) as counties
		from directory.county where state_fips = ${stateFips} and district_key is not null group by district_key`.execute(trx);
	const { postal } = await trx
		.selectFrom("directory.state")
		.select("postal")
		.where("state_fips", "=", stateFips)
		.executeTakeFirstOrThrow();
	const keyOf = new Map(present.map(({ key, counties }) => [counties.join(" "), key]));
	const next = districtsOf(names).map(({ name, counties }) => {
		const made = createHash("sha256").update(counties.join(" ")).digest("hex").slice(0, 8);
		return { name, counties, key: keyOf.get(counties.join(" ")) ?? `${postal}-${made}` };
	});
	const ofState = trx.updateTable("directory.county").where("state_fips", "=", stateFips);
	await ofState.set({ district_key: null }).execute();
	await trx.deleteFrom("directory.district").where("state_fips", "=", stateFips).execute();
	if (next.length === 0) return;
	await trx
		.insertInto("directory.district")
		.values(next.map(({ key, name }) => ({ district_key: key, state_fips: stateFips, name })))
		.execute();
	for (const { key, counties } of next)
		await ofState.set({ district_key: key }).where("county_fips", "in", counties).execute();
}
