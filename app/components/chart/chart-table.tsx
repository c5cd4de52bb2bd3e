import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import type { Cell } from "#app/publish/cell.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";

type Told = Extract<ResolvedChart, { chart: "crops" }>["measure"];
type Row = { key: string; label: string; figures: { measure: Told; cell: Cell | null }[] };

/** The chart's own figures as a table, so that nothing has to be read off a drawing. */
export function ChartTable({ drawn, caption }: { drawn: ResolvedChart; caption: string }) {
	const { i18n } = useTranslation("report");
	const { rows, named, measures } = useTable(drawn);
	const columns: Column<Row>[] = [
		{ key: "name", header: named, cell: ({ label }) => label },
		...measures.map((measure, index): Column<Row> => ({
			key: `${index}`,
			header: wordsIn(measure.label, i18n.language),
			cell: ({ figures }) => {
				const one = figures[index];
				const cell = one?.cell ?? null;
				const status = !cell || (cell.status === "shown" && !cell.steadiness) ? null : cell.status;
				return <Figure {...cell} status={status} measure={one?.measure ?? measure} />;
			},
		})),
	];
	return <DataTable caption={caption} columns={columns} rows={rows} rowKey={({ key }) => key} />;
}

function useTable(drawn: ResolvedChart): { rows: Row[]; named: string; measures: Told[] } {
	const { t } = useTranslation("report");
	const areaName = useAreaName();
	const crop = (key: string) => t(`common:crop.${key}`);
	switch (drawn.chart) {
		case "crops": {
			const rows = drawn.rows.map((cell) => one(cell.cropKey, crop(cell.cropKey), drawn.measure, cell));
			return { rows, named: t("public:table.crop"), measures: [drawn.measure] };
		}
		case "areas": {
			const rows = drawn.rows.map((cell) => one(cell.areaKey, areaName(cell), drawn.measure, cell));
			return { rows, named: t(`common:areaKind.${drawn.kind}`), measures: [drawn.measure] };
		}
		case "seasons": {
			const rows = drawn.rows.map(({ season, cell }) =>
				one(`${season}`, `${season}`, { ...drawn.measure, season }, cell),
			);
			return { rows, named: t("chart.season"), measures: [drawn.measure] };
		}
		case "windows": {
			const rows = drawn.rows.map(({ cropKey, cells }) => ({
				key: cropKey,
				label: crop(cropKey),
				figures: drawn.measures.map((measure, index) => ({ measure, cell: cells[index] ?? null })),
			}));
			return { rows, named: t("public:table.crop"), measures: drawn.measures };
		}
		case "causes": {
			const measures = [drawn.measure, ...drawn.parts];
			const rows = drawn.rows.map(({ cropKey, whole, parts }) => ({
				key: cropKey,
				label: crop(cropKey),
				figures: [whole, ...parts].map((cell, index) => ({ measure: measures[index] ?? drawn.measure, cell })),
			}));
			return { rows, named: t("public:table.crop"), measures };
		}
	}
}

const one = (key: string, label: string, measure: Told, cell: Cell): Row => ({
	key,
	label,
	figures: [{ measure, cell }],
});
