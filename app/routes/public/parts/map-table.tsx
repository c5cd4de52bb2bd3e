import { type FocusEvent, memo, type MouseEvent } from "react";
import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { bandText } from "#app/components/map/cell-words.ts";
import { useAreaName } from "#app/components/map/area-name.ts";
import { SearchBar } from "#app/components/search-bar.tsx";
import { Section } from "#app/components/section.tsx";
import type { MapCell } from "#app/publish/cell.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

type MapTableProps = {
	map: { rows: MapCell[]; measure: ReleaseMeasure; kind: string; query: MapQuery };
	title: string;
	onPoint: (areaKey: string | null) => void;
	onChoose: (areaKey: string) => void;
};

/** The map's figures as a table. Pointing at a row, or tabbing to it, marks its area on the map. */
export const MapTable = memo(function MapTable({
	map: { rows, measure, kind, query },
	title,
	onPoint,
	onChoose,
}: MapTableProps) {
	const { t } = useTranslation("public");
	const columns = useColumns(measure, kind, onChoose);
	const [search] = useSearchParams();
	const kept = [...search].filter(([key]) => key !== "q");
	const point = (event: FocusEvent | MouseEvent) => {
		const row = (event.target as HTMLElement).closest("tr");
		onPoint(row?.querySelector<HTMLElement>("[data-area]")?.dataset.area ?? null);
	};
	return (
		<Section title={t("map.table.title")} id="table">
			<SearchBar label={t(`map.table.search.${kind}`)} defaultValue={query.q}>
				{kept.map(([key, value]) => (
					<input key={key} type="hidden" name={key} value={value} />
				))}
			</SearchBar>
			{/* The rows' links carry the focus; this only listens to where it is. */}
			{/* oxlint-disable-next-line jsx-a11y/no-static-element-interactions */}
			<div onFocus={point} onMouseOver={point} onBlur={() => onPoint(null)} onMouseLeave={() => onPoint(null)}>
				<DataTable
					caption={title}
					columns={columns}
					rows={rows}
					rowKey={(row) => row.areaKey}
					sort={{ key: query.sort, direction: query.direction }}
					empty={<p className="text-quiet">{t("map.table.none", { q: query.q })}</p>}
				/>
			</div>
		</Section>
	);
});

/** A plain press of a row's link chooses without a navigation; with a key held it opens the view's own address. */
export function chosenHere(event: MouseEvent): boolean {
	if (event.ctrlKey || event.metaKey || event.shiftKey || event.altKey) return false;
	event.preventDefault();
	return true;
}

function useColumns(measure: ReleaseMeasure, kind: string, onChoose: MapTableProps["onChoose"]): Column<MapCell>[] {
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	const [search] = useSearchParams();
	const addressOf = (areaKey: string) => {
		const next = new URLSearchParams(search);
		next.set("area", areaKey);
		return `?${next}`;
	};
	return [
		{
			key: "area",
			header: t(`common:areaKind.${kind}`),
			sortable: true,
			cell: (row) => (
				<Link
					to={addressOf(row.areaKey)}
					replace
					preventScrollReset
					data-area={row.areaKey}
					onClick={(event) => chosenHere(event) && onChoose(row.areaKey)}
					className="print-plain"
				>
					{areaName(row)}
				</Link>
			),
		},
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
