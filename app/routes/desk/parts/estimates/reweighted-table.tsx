import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { TableMeasure } from "./estimate-figure.tsx";
import type { WeightingQuery } from "./estimates.schema.ts";
import type { ReweightedRow } from "./reweighted-rows.ts";

type ReweightedTableProps = { query: WeightingQuery; measures: TableMeasure[]; rows: ReweightedRow[] };

/** Each figure by design weights and as the choice would make it. */
export function ReweightedTable({ query, measures, rows }: ReweightedTableProps) {
	const { t, i18n } = useTranslation("release");
	const nameArea = useAreaName();
	const format = useFormat();
	const measureOf = new Map(measures.map((measure) => [measure.key, measure]));
	// A decimal more than is published, as weights can move less than the last digit shown.
	const figure = (told: ReweightedRow["design"], { measureKey }: ReweightedRow) => {
		const measure = measureOf.get(measureKey)!;
		if (told.value === null) return t("estimates.noBase");
		return (
			<>
				<strong>{format.figure(told.value, { ...measure, decimals: measure.decimals + 1 })}</strong>
				{told.standardError !== null && (
					<span className="block whitespace-nowrap text-xs text-quiet">
						{t("estimates.seShort", { value: format.spread(told.standardError, measure) })}
					</span>
				)}
			</>
		);
	};
	return (
		<DataTable
			caption={t("weighting.preview.caption", { crop: t(`common:crop.${query.crop}`) })}
			rows={rows}
			rowKey={(row) => `${row.area.key} ${row.measureKey}`}
			sort={{ key: query.sort, direction: query.direction }}
			columns={[
				{
					key: "area",
					header: t("estimates.area"),
					sortable: true,
					cell: ({ area }) =>
						area.name
							? nameArea({ areaKey: area.key, areaName: area.name, kind: area.kind })
							: t("estimates.ownStates"),
				},
				{
					key: "measure",
					header: t("estimates.measure"),
					cell: (row) => wordsIn(measureOf.get(row.measureKey)!.label, i18n.language),
				},
				{
					key: "design",
					header: t("weighting.preview.design"),
					numeric: true,
					cell: (row) => figure(row.design, row),
				},
				{
					key: "calibrated",
					header: t("weighting.preview.calibrated"),
					numeric: true,
					cell: (row) => figure(row.calibrated, row),
				},
				{
					key: "difference",
					header: t("weighting.preview.difference"),
					numeric: true,
					sortable: true,
					cell: (row) =>
						row.difference === null
							? t("estimates.absent")
							: format.spread(row.difference, measureOf.get(row.measureKey)!),
				},
				{
					key: "errorChange",
					header: t("weighting.preview.errorChange"),
					numeric: true,
					sortable: true,
					cell: ({ errorChange }) =>
						errorChange === null ? t("estimates.absent") : format.quantity(errorChange * 100, "percent", 1),
				},
				{
					key: "answers",
					header: t("estimates.answers"),
					numeric: true,
					cell: (row) => format.number(row.respondents),
				},
			]}
			empty={<EmptyState title={t("estimates.emptyTitle")}>{t("estimates.emptyBody")}</EmptyState>}
		/>
	);
}
