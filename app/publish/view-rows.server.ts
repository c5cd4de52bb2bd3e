import type { DataRecord, DataRow } from "./data-file.ts";
import { toRecord } from "./data-file.ts";
import { selectDataRows } from "./data-file.server.ts";
import { inState } from "./map-choice.ts";
import type { MapView } from "./map-view.server.ts";

/** What a view of the map shows, as rows of the data files: the earlier season's first where there are two. */
export async function listViewRecords({ figures, pair, state }: MapView): Promise<DataRecord[]> {
	const records = await Promise.all(
		(pair ?? [figures]).map(async ({ release, measure, cropKey, kind }) => {
			const rows = (await selectDataRows(release.releaseId)
				.where("m.measure_key", "=", measure.key)
				.where("c.crop_key", "=", cropKey)
				.where("a.kind", "=", kind)
				.execute()) as DataRow[];
			return inState(rows, state).map((row) => toRecord(release, row));
		}),
	);
	return records.flat();
}
