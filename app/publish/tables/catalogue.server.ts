import { groupBy } from "#app/lib/group-by.ts";
import { reader } from "../reader.server.ts";
import type { Release, ReleaseArea } from "../release.ts";
import { listCrops, listEveryRelease, listMeasures } from "../releases.server.ts";
import { kindOrder, type TableArea, type TableCatalogue, type TableRelease } from "./catalogue.ts";

/**
 * What a table can be built from: the releases that stand, and besides those that were asked for by number. Of one that was
 * withdrawn no more is told than that.
 * @param revisions whether editions that were replaced are offered too.
 */
export async function readCatalogue(wanted: readonly number[], revisions: boolean): Promise<TableCatalogue> {
	const offered = (await listEveryRelease())
		.filter(
			({ number, withdrawn, replacedBy }) =>
				wanted.includes(number) || (!withdrawn && (revisions || replacedBy === null)),
		)
		.toSorted((a, b) => b.season - a.season || b.number - a.number);
	const told = offered.filter(({ withdrawn }) => !withdrawn);
	const [measures, crops, areas] = await Promise.all([
		Promise.all(told.map(async ({ number, releaseId }) => [number, await listMeasures(releaseId)] as const)),
		Promise.all(told.map(async ({ number, releaseId }) => [number, await listCrops(releaseId)] as const)),
		listEveryArea(told),
	]);
	return {
		releases: offered.map(toldOf),
		revisions,
		measures: Object.fromEntries(measures),
		crops: Object.fromEntries(crops),
		areas,
	};
}

const toldOf = (release: Release): TableRelease => ({
	number: release.number,
	season: release.season,
	title: release.title,
	formKey: release.formKey,
	seriesId: release.seriesId,
	rules: release.rules,
	codeVersion: release.codeVersion,
	replacedBy: release.replacedBy,
	withdrawn: release.withdrawn,
});

async function listEveryArea(releases: Release[]): Promise<TableArea[]> {
	if (releases.length === 0) return [];
	const rows = await reader()
		.selectFrom("release.area as area")
		.innerJoin("release.release as release", "release.release_id", "area.release_id")
		.select(["release.number", "area_key", "kind", "name", "parent_key", "state_fips"])
		.where(
			"area.release_id",
			"in",
			releases.map(({ releaseId }) => releaseId),
		)
		.orderBy("release.season", "desc")
		.orderBy("release.number", "desc")
		.execute();
	const areas = [...groupBy(rows, (row) => row.area_key).values()].map(([latest, ...earlier]) => ({
		key: latest!.area_key,
		kind: latest!.kind as ReleaseArea["kind"],
		name: latest!.name,
		stateFips: latest!.state_fips,
		liesIn: Object.fromEntries([latest!, ...earlier].map((row) => [row.number, row.parent_key])),
	}));
	return areas.toSorted((a, b) => kindOrder.indexOf(a.kind) - kindOrder.indexOf(b.kind) || (a.key < b.key ? -1 : 1));
}
