import type { Kysely } from "kysely";
import type { DB } from "#db/schema.ts";

export type AreaKind = "county" | "district" | "state" | "region";
/** An area as figures are told for it. `key` is FIPS code, district key, or `network`; the region has no parent. */
export type Area = {
	key: string;
	kind: AreaKind;
	parentKey: string | null;
	stateFips: string | null;
	/** "Story", "Central Iowa", "Iowa", or the network's own name. */
	name: string;
	/** The name where it stands alone: counties of one name lie in several states, so "Story County, Iowa". */
	label: string;
};

export const regionKey = "network";
export const networkName = "Four Rivers Fruit Network";

/**
 * The tree of areas, region first, then by state each state, its districts, their counties; a county without a district
 * hangs on its state. With `ofStates` only those states' branches, without the region.
 */
export async function listAreas(trx: Kysely<DB>, ofStates?: readonly string[]): Promise<Area[]> {
	const wanted = <T extends { state_fips: string }>(row: T) => !ofStates || ofStates.includes(row.state_fips);
	const states = (
		await trx.selectFrom("directory.state").select(["state_fips", "name"]).orderBy("name").execute()
	).filter(wanted);
	const districts = await trx
		.selectFrom("directory.district")
		.select(["district_key", "state_fips", "name"])
		.orderBy("district_key")
		.execute();
	const counties = await trx
		.selectFrom("directory.county")
		.select(["county_fips", "state_fips", "district_key", "name"])
		.orderBy("name")
		.execute();

	const region = area({ key: regionKey, kind: "region", parentKey: null, stateFips: null, name: networkName });
	const branches = states.flatMap(({ state_fips: stateFips, name: stateName }) =>
		[area({ key: stateFips, kind: "state", parentKey: regionKey, stateFips, name: stateName })].concat(
			districts
				.filter((district) => district.state_fips === stateFips)
				.map(({ district_key: key, name }) => area({ key, kind: "district", parentKey: stateFips, stateFips, name })),
			counties
				.filter((county) => county.state_fips === stateFips)
				.map(({ county_fips: key, district_key, name }) => {
					const parentKey = district_key ?? stateFips;
					return area({ key, kind: "county", parentKey, stateFips, name }, `${name} County, ${stateName}`);
				}),
		),
	);
	return ofStates ? branches : [region, ...branches];
}

function area(fields: Omit<Area, "label">, label = fields.name): Area {
	return { ...fields, label };
}

/** The county of a FIPS code, for an input that names one. */
export async function findCounty(trx: Kysely<DB>, countyFips: string) {
	return trx
		.selectFrom("directory.county")
		.select(["county_fips", "state_fips", "district_key", "name"])
		.where("county_fips", "=", countyFips)
		.executeTakeFirst();
}
