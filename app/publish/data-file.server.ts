import type { DataRow } from "./data-file.ts";
import { reader } from "./reader.server.ts";

/** Every measure of every cell of a release, in a fixed order, as the reader's role sees it. */
export async function listDataRows(releaseId: string): Promise<DataRow[]> {
	return (await selectDataRows(releaseId).execute()) as DataRow[];
}

/** Measures have positions of their own, so this is one order, whoever asks. */
export function selectDataRows(releaseId: string) {
	return reader()
		.selectFrom("release.cell as c")
		.innerJoin("release.area as a", (join) =>
			join.onRef("a.release_id", "=", "c.release_id").onRef("a.area_key", "=", "c.area_key"),
		)
		.innerJoin("release.measure as m", "m.release_id", "c.release_id")
		.leftJoin("release.figure as f", (join) =>
			join
				.onRef("f.release_id", "=", "c.release_id")
				.onRef("f.measure_key", "=", "m.measure_key")
				.onRef("f.crop_key", "=", "c.crop_key")
				.onRef("f.area_key", "=", "c.area_key"),
		)
		.select([
			"m.measure_key as measureKey",
			"c.crop_key as cropKey",
			"c.area_key as areaKey",
			"a.kind as areaKind",
			"a.name as areaName",
			"a.state_fips as stateFips",
			"c.status as cellStatus",
			"f.value",
			"f.standard_error as standardError",
			"f.cv",
			"f.lower_bound as lower",
			"f.upper_bound as upper",
			"f.first_quartile as firstQuartile",
			"f.third_quartile as thirdQuartile",
			"m.unit",
			"c.respondents_band as respondentsBand",
			"f.steadiness",
		])
		.where("c.release_id", "=", releaseId)
		.orderBy("m.position")
		.orderBy("c.crop_key")
		.orderBy("a.kind")
		.orderBy("c.area_key");
}
