import { Client } from "pg";

/** A grower of the test with what the orchard normally brings and what was picked, in pounds. All invented. */
export type TestGrower = {
	name: string;
	county: string;
	email: string;
	language: "en" | "es";
	trees: number;
	normalLb: number;
	harvestedLb: number;
	freezeShare: number;
};

// Three counties of one district and one of another. Louisa has two growers only, so it must be withheld, and a neighbour
// with it, or it could be worked out from the district.
const counties = [
	{ county: "19103", growers: 7 },
	{ county: "19183", growers: 6 },
	{ county: "19115", growers: 2 },
	{ county: "19113", growers: 6 },
];

export const growers: TestGrower[] = counties.flatMap(({ county, growers: count }, place) =>
	Array.from({ length: count }, (_, index): TestGrower => {
		const trees = 100 + 10 * index + 5 * place;
		const normalLb = trees * 42;
		return {
			name: `Test Orchard ${county}-${index + 1}`,
			county,
			email: `grower-${county}-${index + 1}@orchard.example`,
			language: place === 0 && index === 1 ? "es" : "en",
			trees,
			normalLb,
			// The freeze took between two and nine tenths.
			harvestedLb: Math.round(normalLb * (0.8 - 0.1 * ((index + place) % 8))),
			freezeShare: 60 + 5 * (index % 4),
		};
	}),
);

/** Crop loss of a county in percent when everybody in it answers: nothing is estimated then, only added up. */
export function lossOf(county: string): number {
	const there = growers.filter((grower) => grower.county === county);
	const sum = (key: "normalLb" | "harvestedLb") => there.reduce((total, grower) => total + grower[key], 0);
	return (100 * (sum("normalLb") - sum("harvestedLb"))) / sum("normalLb");
}

export async function addGrowers(ownerUrl: string): Promise<void> {
	const owner = new Client({ connectionString: ownerUrl });
	await owner.connect();
	for (const { name, county, email, language, trees } of growers) {
		await owner.query(
			`with w as (insert into directory.owner (name) values ($1) returning owner_id),
			o as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email, language)
				select owner_id, $1, $2, left($2, 2), $1, $3, $4 from w returning operation_id)
			insert into directory.planting (operation_id, crop_key, cultivar, bearing_trees)
			select operation_id, 'apple', 'Haralson', $5 from o`,
			[name, county, email, language, trees],
		);
	}
	await owner.end();
}
