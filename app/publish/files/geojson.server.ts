import { groupBy } from "#app/lib/group-by.ts";
import { type AreaShape, areaShapes } from "../area-shapes.server.ts";
import type { AreaKind } from "../cell.ts";
import type { DataRecord } from "../data-file.ts";
import type { FileSource } from "./release-file.ts";

/**
 * Areas of one kind with their figures as GeoJSON (RFC 7946). Each area's `cells` hold the rows of cells.csv; beside them
 * each figure stands flat as `measure/crop`, in a table led by the release's number, null where there is none, with `measure/crop/status` to say why, since mapping
 * tools colour by a flat property.
 */
export function cellsGeojson({ parts, records, isTable, terms, license }: FileSource, kind: AreaKind): unknown {
	const recordsOf = groupBy(
		records.filter((record) => record.area_kind === kind),
		(record) => record.area_code,
	);
	return {
		type: "FeatureCollection",
		// Members beside those of the standard, which it lets readers pass over.
		terms_of_use: terms,
		...(license && { license }),
		features: shapesOf(parts, kind).map(({ area, shape }) => {
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
					...Object.fromEntries(cells.flatMap((cell) => flat(cell, isTable))),
					cells,
				},
			};
		}),
	};
}

/** Each area that is told once, outlined as in the latest release that tells it. */
function shapesOf(parts: FileSource["parts"], kind: AreaKind): AreaShape[] {
	const shapes = new Map<string, AreaShape>();
	for (const { areas, outlined } of parts) {
		const told = new Set(areas.map(({ key }) => key));
		for (const one of areaShapes(outlined, kind)) if (told.has(one.area.key)) shapes.set(one.area.key, one);
	}
	return [...shapes.values()];
}

function flat(
	{ release, measure, crop, value, status }: DataRecord,
	isTable: boolean,
): [string, number | string | null][] {
	const name = isTable ? `${release}/${measure}/${crop}` : `${measure}/${crop}`;
	return [
		[name, value],
		[`${name}/status`, status],
	];
}
