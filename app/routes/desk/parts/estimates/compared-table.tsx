import { useTranslation } from "react-i18next";
import { useAreaName } from "#app/components/map/area-name.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Figure } from "#app/components/figure.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ComparedRow } from "./compared-rows.ts";
import type { TableMeasure } from "./estimate-figure.tsx";
import type { ComparedQuery } from "./estimates.schema.ts";

type ComparedTableProps = { query: ComparedQuery; measures: TableMeasure[]; rows: ComparedRow[]; isDrafted: boolean };

/** Each figure as drafted and as it would be drafted now. */
export function ComparedTable({ query, measures, rows, isDrafted }: ComparedTableProps) {
	const { t, i18n } = useTranslation("release");
	const nameArea = useAreaName();
	const format = useFormat();
	const measureOf = new Map(measures.map((measure) => [measure.key, measure]));
	const figure = (told: ComparedRow["current"], { measureKey }: ComparedRow) => {
		const measure = measureOf.get(measureKey)!;
		// A decimal more than is published, as a correction can move less than the last digit shown.
		return told?.value == null ? (
			t("estimates.none")
		) : (
			<Figure {...told} status="shown" measure={{ ...measure, decimals: measure.decimals + 1 }} />
		);
	};
	const empty = isDrafted ? "same" : "noDraft";
	return (
		<DataTable
			caption={t("compared.caption", { crop: t(`common:crop.${query.crop}`) })}
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
				{ key: "drafted", header: t("compared.asDrafted"), numeric: true, cell: (row) => figure(row.drafted, row) },
				{ key: "current", header: t("compared.now"), numeric: true, cell: (row) => figure(row.current, row) },
				{
					key: "difference",
					header: t("compared.difference"),
					numeric: true,
					sortable: true,
					cell: (row) =>
						row.difference === null
							? t("estimates.absent")
							: format.spread(row.difference, measureOf.get(row.measureKey)!),
				},
				{
					key: "answers",
					header: t("compared.answersNow"),
					numeric: true,
					cell: (row) => format.number(row.respondentsNow),
				},
			]}
			empty={<EmptyState title={t(`compared.${empty}Title`)}>{t(`compared.${empty}Body`)}</EmptyState>}
		/>
	);
}
