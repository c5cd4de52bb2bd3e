import type { MultiPolygon, Polygon } from "geojson";
import { joinedCounties } from "#app/lib/geography/joined-counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import type { AreaKind } from "./cell.ts";
import type { ReleaseArea } from "./release.ts";

/** Four decimals of a degree are about ten metres, finer than the outlines are. */
const decimals = 4;

export type AreaShape = { area: ReleaseArea; shape: Polygon | MultiPolygon | null };

/** The areas of one kind with their outlines: whatever is wider than a county is its counties joined. */
export function areaShapes(areas: readonly ReleaseArea[], kind: AreaKind): AreaShape[] {
	const counties = areas.filter((area) => area.kind === "county");
	return areas
		.filter((area) => area.kind === kind)
		.map((area) => {
			const within = counties.filter((county) => liesIn(county, area)).map(({ key }) => key);
			return { area, shape: joinedCounties(usTopology(), within, decimals) };
		});
}

function liesIn(county: ReleaseArea, area: ReleaseArea): boolean {
	if (area.kind === "county") return county.key === area.key;
	if (area.kind === "district") return county.parentKey === area.key;
	return area.kind === "region" || county.stateFips === area.key;
}
