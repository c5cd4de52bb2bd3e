import { useTranslation } from "react-i18next";
import type { Column } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { bandText } from "#app/components/map/cell-words.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { MapCell } from "#app/publish/cell.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";
import type { SeasonRow } from "#app/publish/season-pair.ts";
import { AreaTable } from "./map-area-table.tsx";
import { type Pair, useSeasonName } from "./map-pair.tsx";

type PairTableProps = {
	pair: Pair;
	query: MapQuery;
	title: string;
	onPoint: (areaKey: string | null) => void;
	onChoose: (areaKey: string) => void;
};

/** Both seasons' figures by area, with the change between them. */
export function PairTable({ pair, ...shown }: PairTableProps) {
	const { t } = useTranslation("public");
	const columns = usePairColumns(pair);
	return (
		<AreaTable
			kind={pair.later.kind}
			table={pair.table}
			columns={columns}
			isBlank={isBlank}
			note={t("map.two.changeNote")}
			{...shown}
		/>
	);
}

const isBlank = ({ earlier, later }: SeasonRow) => [earlier, later].every((cell) => cell?.look === "no_growers");

function usePairColumns({ earlier, later }: Pair): Column<SeasonRow>[] {
	const { t } = useTranslation("public");
	const seasonName = useSeasonName();
	const changeWords = useChangeWords(later.measure);
	return [
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
