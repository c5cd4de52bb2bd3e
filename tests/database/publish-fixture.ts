import type { Client } from "pg";

/** A number that would give a withheld county away; no page, file or address may ever hold it. */
export const secret = 73.125;

/** Tables of a release whose rows must be those of an audited draft, which readers know nothing of. */
const ofDraft = [
	["release.release", "release_of_audited_draft"],
	["release.cell", "cell_as_audited"],
] as const;

/**
 * An invented release of two measures and one crop: Johnson shown, Linn withheld, Story without growers, Polk too rough.
 * Written by the owner without a draft behind it, which nobody else can do.
 */
export async function addRelease(owner: Client, season = 2031): Promise<{ releaseId: string; number: number }> {
	for (const [table, trigger] of ofDraft) await owner.query(`alter table ${table} disable trigger ${trigger}`);
	const words = JSON.stringify({ en: `After harvest ${season}`, es: `Después de la cosecha ${season}` });
	const { rows } = await owner.query(
		`insert into release.release (release_id, season, form_key, title, rules, method, audit, code_version, checksum, series_id)
		values (gen_random_uuid(), $1, 'after_harvest', $2, $3, $4, '{}', 'test', 'sum', gen_random_uuid()) returning release_id, number`,
		[
			season,
			words,
			JSON.stringify({ minimumOwners: 5, dominancePercent: 10, steadyCv: 0.15, careCv: 0.3 }),
			JSON.stringify({
				all: { asked: 40, answered: 25 },
				openedAt: "2031-09-01T00:00:00Z",
				closedAt: "2031-10-01T00:00:00Z",
			}),
		],
	);
	const releaseId = rows[0].release_id as string;
	const insert = async (table: string, columns: string, values: unknown[][]) => {
		for (const row of values) {
			const places = row.map((_, index) => `$${index + 2}`).join(", ");
			await owner.query(`insert into release.${table} (release_id, ${columns}) values ($1, ${places})`, [
				releaseId,
				...row,
			]);
		}
	};
	await insert("area", "area_key, kind, parent_key, state_fips, name", [
		["network", "region", null, null, "Four Rivers Fruit Network"],
		["19", "state", "network", "19", "Iowa"],
		["IA-3", "district", "19", "19", "East Iowa"],
		["19103", "county", "IA-3", "19", "Johnson"],
		["19113", "county", "IA-3", "19", "Linn"],
		["19153", "county", "19", "19", "Polk"],
		["19169", "county", "19", "19", "Story"],
	]);
	await insert("measure", "measure_key, position, label, description, kind, unit, decimals, worse, hue", [
		["crop_loss", 0, words, words, "ratio", "percent", 0, "more", "loss"],
		["yield_per_tree", 1, words, words, "ratio", "lb_per_tree", 1, "less", "yield"],
	]);
	await insert("cell", "crop_key, area_key, status, respondents_band", [
		["apple", "network", "shown", "50-99"],
		["apple", "IA-3", "shown", "20-49"],
		["apple", "19103", "shown", "10-19"],
		["apple", "19113", "withheld", null],
		["apple", "19153", "shown", "5-9"],
		["apple", "19169", "no_growers", null],
	]);
	await insert(
		"figure",
		"measure_key, crop_key, area_key, value, standard_error, cv, lower_bound, upper_bound, steadiness",
		[
			["crop_loss", "apple", "network", 41, 2, 0.05, 37, 45, "steady"],
			["crop_loss", "apple", "IA-3", 52, 4, 0.08, 44, 60, "steady"],
			["crop_loss", "apple", "19103", 38, 8, 0.21, 22, 54, "care"],
			["crop_loss", "apple", "19153", null, null, null, null, null, "rough"],
		],
	);
	for (const [table, trigger] of ofDraft) await owner.query(`alter table ${table} enable trigger ${trigger}`);
	return { releaseId, number: rows[0].number as number };
}
