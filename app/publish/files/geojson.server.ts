import { groupBy } from "#app/lib/group-by.ts";
import { areaShapes } from "../area-shapes.server.ts";
import type { AreaKind } from "../cell.ts";
import type { DataRecord } from "../data-file.ts";
import type { FileSource } from "./release-file.ts";

/**
 * Areas of one kind with their figures as GeoJSON (RFC 7946). Each area's `cells` hold the rows of cells.csv; beside them
 * each figure stands flat as `measure/crop`, null where there is none, with `measure/crop/status` to say why, since mapping
 * tools colour by a flat property.
 */
export function cellsGeojson({ areas, records }: FileSource, kind: AreaKind): unknown {
	const recordsOf = groupBy(
		records.filter((record) => record.area_kind === kind),
		(record) => record.area_code,
	);
	return {
		type: "FeatureCollection",
		features: areaShapes(areas, kind).map(({ area, shape }) => {
			const cells = recordsOf.get(area.key) ?? [];
			return {
				type: "Feature",
				id: area.key,
				geometry: shape,
				properties: {
					area_code: area.key,
					area_kind: area.kind,
					area_name: area.name,
					state_code: area.stateFips,
					...Object.fromEntries(cells.flatMap(flat)),
					cells,
				},
			};
		}),
	};
}

function flat({ measure, crop, value, status }: DataRecord): [string, number | string | null][] {
	return [
		[`${measure}/${crop}`, value],
		[`${measure}/${crop}/status`, status],
	];
}
