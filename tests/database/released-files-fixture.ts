import type { Client } from "pg";
import { makeReleaseFiles } from "#app/jobs/make-release-files.server.ts";
import { addRelease } from "./publish-fixture.ts";

/** Cells that the usual release lacks: a day measure, a text a spreadsheet would run, a zero and a negative number. */
async function addOddCells(owner: Client, releaseId: string): Promise<void> {
	await owner.query("alter table release.cell disable trigger cell_as_audited");
	const words = JSON.stringify({ en: 'First bloom, "early" kinds', es: "Primera flor" });
	await owner.query(
		`insert into release.area (release_id, area_key, kind, parent_key, state_fips, name) values
		($1, '01', 'state', 'network', '01', 'Alabama'), ($1, '01001', 'county', '01', '01', '=Autauga, "old"')`,
		[releaseId],
	);
	await owner.query(
		`insert into release.measure (release_id, measure_key, position, label, description, kind, unit, decimals, hue)
		values ($1, 'first_bloom.day', 2, $2, $2, 'day', 'day', 0, 'bloom')`,
		[releaseId, words],
	);
	await owner.query(
		`insert into release.cell (release_id, crop_key, area_key, status, respondents_band) values
		($1, 'plum', '01001', 'shown', '5-9'), ($1, 'plum', '19103', 'shown', '10-19'), ($1, 'plum', '19113', 'withheld', null)`,
		[releaseId],
	);
	await owner.query(
		`insert into release.figure (release_id, measure_key, crop_key, area_key, value, standard_error, cv, lower_bound,
			upper_bound, first_quartile, third_quartile, steadiness) values
		($1, 'first_bloom.day', 'plum', '01001', 121, 1.5, null, 118, 124, 119, 123, 'steady'),
		($1, 'crop_loss', 'plum', '01001', 0, 0, null, 0, 0, null, null, 'steady'),
		($1, 'yield_per_tree', 'plum', '19103', -2.5, 0.1, 0.04, -3, 1e21, null, null, 'steady')`,
		[releaseId],
	);
	await owner.query("alter table release.cell enable trigger cell_as_audited");
	await owner.query("insert into release.form (release_id, version, definition) values ($1, 2, $2)", [
		releaseId,
		JSON.stringify(askedForm),
	]);
}

/** What growers were asked, in few words, with a text that a spreadsheet would run. */
const askedForm = {
	key: "after_harvest",
	title: { en: "After harvest", es: "Después de la cosecha" },
	minutes: 5,
	screens: [
		{
			key: "crop",
			title: { en: "Your crop", es: "Su cosecha" },
			perPlanting: true,
			questions: [
				{
					key: "harvested",
					type: "number",
					unitFamily: "mass",
					required: true,
					text: { en: "=How much?", es: "¿Cuánto?" },
				},
				{
					key: "cause",
					type: "choice",
					required: false,
					text: { en: "What was lost to?", es: "¿Por qué se perdió?" },
					options: [
						{ key: "freeze", text: { en: "Freeze or frost", es: "Helada" } },
						{ key: "hail", text: { en: "Hail", es: "Granizo" } },
					],
				},
			],
		},
	],
};

/** An invented release of three measures and two crops, without files. */
export async function addOddRelease(owner: Client, season = 2031): Promise<{ releaseId: string; number: number }> {
	const release = await addRelease(owner, season);
	await addOddCells(owner, release.releaseId);
	return release;
}

/** The same with its files, made by the job as after a publication. */
export async function addReleaseWithFiles(
	owner: Client,
	season = 2031,
): Promise<{ releaseId: string; number: number }> {
	const release = await addOddRelease(owner, season);
	await makeReleaseFiles(release);
	return release;
}
