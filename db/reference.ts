import { sql, type Transaction } from "kysely";
import { crops } from "#app/directory/crops.ts";
import { listCounties } from "#app/lib/geography/counties.ts";
import { listNeighbors } from "#app/lib/geography/neighbors.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { connect } from "./connect.ts";
import { districts } from "./reference/districts.ts";
import { states } from "./reference/states.ts";
import type { DB } from "./schema.ts";

/**
 * Loads what every installation needs before its first grower: states, districts, counties, their neighbours, crops. Runs
 * after each migration and changes nothing the second time. A district that a coordinator has redrawn since stays redrawn.
 */
export async function loadReference(ownerUrl: string): Promise<void> {
	const db = connect(ownerUrl, { max: 1, name: "tallygrove-reference" });
	try {
		await db.transaction().execute(async (trx) => {
			await loadAreas(trx);
			await loadNeighbors(trx);
			await loadCrops(trx);
		});
	} finally {
		await db.destroy();
	}
}

async function loadAreas(trx: Transaction<DB>): Promise<void> {
	await trx
		.insertInto("directory.state")
		.values(
			states.map(({ stateFips: state_fips, name, postal, timeZone: time_zone }) => ({
				state_fips,
				name,
				postal,
				time_zone,
			})),
		)
		.onConflict((conflict) =>
			conflict.column("state_fips").doUpdateSet({ time_zone: (eb) => eb.ref("excluded.time_zone") }),
		)
		.execute();

	const districtOf = new Map(
		listDistricts().flatMap(({ districtKey, countyFips }) => countyFips.map((fips) => [fips, districtKey])),
	);
	await trx
		.insertInto("directory.district")
		.values(
			listDistricts().map(({ districtKey: district_key, stateFips: state_fips, name }) => ({
				district_key,
				state_fips,
				name,
			})),
		)
		.onConflict((conflict) => conflict.doNothing())
		.execute();
	await trx
		.insertInto("directory.county")
		.values(
			coveredCounties().map(({ countyFips, stateFips, name }) => ({
				county_fips: countyFips,
				state_fips: stateFips,
				district_key: districtOf.get(countyFips) ?? null,
				name,
			})),
		)
		.onConflict((conflict) => conflict.column("county_fips").doUpdateSet({ name: (eb) => eb.ref("excluded.name") }))
		.execute();
}

async function loadNeighbors(trx: Transaction<DB>): Promise<void> {
	const neighborsOf = listNeighbors(usTopology());
	const pairs = coveredCounties().flatMap(({ countyFips }) =>
		(neighborsOf.get(countyFips) ?? []).map((neighbor) => ({ county_fips: countyFips, neighbor_fips: neighbor })),
	);
	await trx
		.insertInto("directory.county_neighbor")
		.values(pairs)
		.onConflict((conflict) => conflict.doNothing())
		.execute();
}

async function loadCrops(trx: Transaction<DB>): Promise<void> {
	await trx
		.insertInto("directory.crop")
		.values(
			crops.map(({ cropKey, position, plantKind, bushelLb }) => ({
				crop_key: cropKey,
				position,
				plant_kind: plantKind,
				bushel_lb: bushelLb,
			})),
		)
		.onConflict((conflict) =>
			conflict.column("crop_key").doUpdateSet({
				position: sql`excluded.position`,
				plant_kind: sql`excluded.plant_kind`,
				bushel_lb: sql`excluded.bushel_lb`,
			}),
		)
		.execute();
}

function coveredCounties() {
	return listCounties(
		usTopology(),
		states.map((state) => state.stateFips),
	);
}

/** The districts with whole FIPS codes of their counties. */
export function listDistricts(): { districtKey: string; stateFips: string; name: string; countyFips: string[] }[] {
	return districts.map(([districtKey, name, counties]) => {
		const state = states.find(({ postal }) => districtKey.startsWith(`${postal}-`));
		if (!state) throw new Error(`District ${districtKey} names no covered state`);
		const countyFips = counties.split(" ").map((county) => state.stateFips + county);
		return { districtKey, stateFips: state.stateFips, name, countyFips };
	});
}
