import { selectDataRows } from "../data-file.server.ts";
import { type DataRecord, type DataRow, toRecord } from "../data-file.ts";
import { findRelease } from "../releases.server.ts";
import { partOf, type TableCatalogue } from "./catalogue.ts";
import type { TableSelection } from "./selection.ts";

/**
 * The released cells of a choice as the reader's role sees them: release by release in the order of the files, each as the
 * file of its release tells it.
 */
export async function listTableRecords(catalogue: TableCatalogue, selection: TableSelection): Promise<DataRecord[]> {
	const parts = await Promise.all(
		selection.release.map(async (number) => {
			const { measures, crops, areas } = partOf(catalogue, selection, number);
			const release = await findRelease(number);
			if (!release || release.withdrawn || !measures.length || !crops.length || !areas.length) return [];
			const keys = areas.map(({ key }) => key);
			const rows = await selectDataRows(release.releaseId)
				.where("m.measure_key", "in", measures)
				.where("c.crop_key", "in", crops)
				.where("c.area_key", "in", keys)
				.execute();
			return rows.map((row) => toRecord(release, row as DataRow));
		}),
	);
	return parts.flat();
}
