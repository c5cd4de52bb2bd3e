import { memo } from "react";
import { useTranslation } from "react-i18next";
import type { Column } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { bandText } from "#app/components/map/cell-words.ts";
import type { PageOf } from "#app/lib/page-of.ts";
import type { MapCell } from "#app/publish/cell.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";
import { AreaTable } from "./map-area-table.tsx";

type MapTableProps = {
	map: { table: PageOf<MapCell>; measure: ReleaseMeasure; kind: string; query: MapQuery };
	title: string;
	onPoint: (areaKey: string | null) => void;
	onChoose: (areaKey: string) => void;
};

/** The map's figures as a table. */
export const MapTable = memo(function MapTable({ map: { table, measure, kind, query }, ...shown }: MapTableProps) {
	const columns = useColumns(measure);
	return <AreaTable {...{ table, kind, query, columns, isBlank }} {...shown} />;
});

const isBlank = ({ look }: MapCell) => look === "no_growers";

function useColumns(measure: ReleaseMeasure): Column<MapCell>[] {
	const { t } = useTranslation("public");
	return [
		{
			key: "value",
			header: t("map.table.value"),
			sortable: true,
			cell: (row) => (
				<Figure
					status={row.look === "no_figure" ? null : row.status}
					value={row.value}
					lower={row.lower}
					upper={row.upper}
					steadiness={row.steadiness}
					quartiles={row.quartiles}
					measure={measure}
				/>
			),
		},
		{
			key: "steadiness",
			header: t("map.table.steadiness"),
			cell: (row) => (row.steadiness ? t(`common:steadiness.${row.steadiness}`) : ""),
		},
		{
			key: "band",
			header: t("map.table.band"),
			numeric: true,
			cell: (row) => (row.respondentsBand ? bandText(row.respondentsBand) : ""),
		},
	];
}
