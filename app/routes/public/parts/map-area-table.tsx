import type { FocusEvent, MouseEvent } from "react";
import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { Paging } from "#app/components/paging.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { PageOf } from "#app/lib/page-of.ts";
import type { Cell } from "#app/publish/cell.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";

type Area = Pick<Cell, "areaKey" | "areaName" | "kind" | "stateFips">;
type AreaTableProps<Row extends Area> = {
	kind: string;
	query: MapQuery;
	title: string;
	table: PageOf<Row>;
	/** Those after the area's own. */
	columns: Column<Row>[];
	/** An area that has no growers: on the map it is blank, and paper is not spent on it. */
	isBlank: (row: Row) => boolean;
	note?: string;
	onPoint: (areaKey: string | null) => void;
	onChoose: (areaKey: string) => void;
};

/** A map's areas as a table with a search. Pointing at a row, or tabbing to it, marks its area on the map. */
export function AreaTable<Row extends Area>({
	kind,
	query,
	title,
	table,
	columns,
	isBlank,
	note,
	...marks
}: AreaTableProps<Row>) {
	const { t } = useTranslation("public");
	const areaColumn = useAreaColumn<Row>(kind, marks.onChoose);
	const format = useFormat();
	const [search] = useSearchParams();
	const kept = [...search].filter(([key]) => !["q", "page", "find"].includes(key));
	const blank = table.rows.filter(isBlank).length;
	const point = (event: FocusEvent | MouseEvent) => {
		const row = (event.target as HTMLElement).closest("tr");
		marks.onPoint(row?.querySelector<HTMLElement>("[data-area]")?.dataset.area ?? null);
	};
	return (
		<div className="print:break-before-page">
			<Section title={t("map.table.title")} id="table">
				<SearchBar label={t(`map.table.search.${kind}`)} defaultValue={query.q}>
					{kept.map(([key, value]) => (
						<input key={key} type="hidden" name={key} value={value} />
					))}
				</SearchBar>
				{/* The rows' links carry the focus; this only listens to where it is. */}
				{/* oxlint-disable-next-line jsx-a11y/no-static-element-interactions */}
				<div
					onFocus={point}
					onMouseOver={point}
					onBlur={() => marks.onPoint(null)}
					onMouseLeave={() => marks.onPoint(null)}
				>
					<DataTable
						caption={title}
						columns={[areaColumn, ...columns]}
						rows={table.rows}
						rowKey={(row) => row.areaKey}
						sort={{ key: query.sort, direction: query.direction }}
						screenOnly={isBlank}
						empty={<p className="text-quiet">{t("map.table.none", { q: query.q })}</p>}
					/>
				</div>
				{table.total > 0 && <Paging {...table} part="table" />}
				{blank > 0 && (
					<p className="mt-1 hidden text-sm text-quiet print:block">
						{t("map.table.notPrinted", { value: format.number(blank) })}
					</p>
				)}
				{note && <p className="mt-3 max-w-prose text-sm text-quiet">{note}</p>}
			</Section>
		</div>
	);
}

function useAreaColumn<Row extends Area>(kind: string, onChoose: AreaTableProps<Row>["onChoose"]): Column<Row> {
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	const [search] = useSearchParams();
	const addressOf = (areaKey: string) => {
		const next = new URLSearchParams(search);
		next.set("area", areaKey);
		next.delete("find");
		return `?${next}`;
	};
	return {
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
	};
}

/** A plain press of a row's link chooses without a navigation; with a key held it opens the view's own address. */
export function chosenHere(event: MouseEvent): boolean {
	if (event.ctrlKey || event.metaKey || event.shiftKey || event.altKey) return false;
	event.preventDefault();
	return true;
}
