import type { FocusEvent, MouseEvent } from "react";
import { useTranslation } from "react-i18next";
import { Link, useSearchParams } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { bandText } from "#app/components/map/cell-words.ts";
import { SearchBar } from "#app/components/search-bar.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { MapCell } from "#app/publish/cell.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";
import type { SeasonRow } from "#app/publish/season-pair.ts";
import { type Pair, useSeasonName } from "./map-pair.tsx";
import { chosenHere } from "./map-table.tsx";

type PairTableProps = {
	pair: Pair;
	query: MapQuery;
	title: string;
	onPoint: (areaKey: string | null) => void;
	onChoose: (areaKey: string) => void;
};

/** Both seasons' figures by area, with the change between them. */
export function PairTable({ pair, query, title, onPoint, onChoose }: PairTableProps) {
	const { t } = useTranslation("public");
	const [search] = useSearchParams();
	const columns = usePairColumns(pair, onChoose);
	const kept = [...search].filter(([key]) => key !== "q");
	const point = (event: FocusEvent | MouseEvent) => {
		const row = (event.target as HTMLElement).closest("tr");
		onPoint(row?.querySelector<HTMLElement>("[data-area]")?.dataset.area ?? null);
	};
	return (
		<Section title={t("map.table.title")} id="table">
			<SearchBar label={t(`map.table.search.${pair.later.kind as "county" | "district"}`)} defaultValue={query.q}>
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
					rows={pair.rows}
					rowKey={(row) => row.areaKey}
					sort={{ key: query.sort, direction: query.direction }}
					empty={<p className="text-quiet">{t("map.table.none", { q: query.q })}</p>}
				/>
			</div>
			<p className="mt-3 max-w-prose text-sm text-quiet">{t("map.two.changeNote")}</p>
		</Section>
	);
}

function usePairColumns({ earlier, later }: Pair, onChoose: PairTableProps["onChoose"]): Column<SeasonRow>[] {
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	const seasonName = useSeasonName();
	const changeWords = useChangeWords(later.measure);
	const [search] = useSearchParams();
	const addressOf = (area: string) =>
		`?${new URLSearchParams([...[...search].filter(([key]) => key !== "area"), ["area", area]])}`;
	return [
		{
			key: "area",
			header: t(`common:areaKind.${later.kind}`),
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
			key: "earlier",
			header: seasonName(earlier),
			sortable: true,
			cell: ({ earlier: cell }) => <SeasonFigure cell={cell} measure={earlier.measure} />,
		},
		{
			key: "value",
			header: seasonName(later),
			sortable: true,
			cell: ({ later: cell }) => <SeasonFigure cell={cell} measure={later.measure} />,
		},
		{
			key: "change",
			header: t("map.two.change"),
			sortable: true,
			cell: ({ change }) =>
				change === null ? <span className="text-quiet">{t("map.two.noChange")}</span> : changeWords(change),
		},
	];
}

function SeasonFigure({ cell, measure }: { cell: MapCell | null; measure: ReleaseMeasure }) {
	const { t } = useTranslation("public");
	const status = !cell || cell.look === "no_figure" ? null : cell.status;
	return (
		<>
			<Figure {...cell} status={status} measure={measure} />
			{cell?.respondentsBand && (
				<span className="block text-xs text-quiet">
					{t("map.said.bandAlone", { band: bandText(cell.respondentsBand) })}
				</span>
			)}
		</>
	);
}

/** A change in words that also say its direction: a sign alone is easily missed. */
function useChangeWords(measure: ReleaseMeasure) {
	const { t } = useTranslation("public");
	const format = useFormat();
	return (change: number): string => {
		if (change === 0) return t("map.two.same");
		const by = format.distance(change, measure);
		if (measure.unit === "day") return t(`map.two.${change > 0 ? "later" : "earlier"}`, { by });
		return t(`map.two.${change > 0 ? "up" : "down"}`, { by });
	};
}
