import { useTranslation } from "react-i18next";
import { useRevalidator } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Chart } from "#app/components/chart/chart.tsx";
import { ends, numbered } from "#app/components/chart/chart-look.ts";
import { classes } from "#app/components/classes.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { countCells } from "#app/publish/tables/catalogue.ts";
import { tableLimits } from "#app/publish/tables/limits.ts";
import type { TableChart } from "#app/publish/tables/views.ts";
import { TableDownloads } from "./table-downloads.tsx";
import { TableGrid } from "./table-grid.tsx";
import { TableMapView } from "./table-map.tsx";
import { useTableNames } from "./table-names.ts";
import { TableNotes } from "./table-notes.tsx";
import type { TablePage } from "./table-page.ts";

type ResultProps = TablePage & { busy: boolean };

/** What a choice comes to: notes on what can be compared, drawings, the table, and ways to take it along. */
export function TableResult(props: ResultProps) {
	const { table, busy, state, catalogue, selection } = props;
	const { t } = useTranslation("dataroom");
	return (
		<Section title={t("tables.result")} id="table">
			<div aria-busy={busy} className={classes(busy && "opacity-60")}>
				{state === "failed" && <Failed />}
				{state !== "failed" && !table && (
					<EmptyState title={t("tables.noTableTitle")}>{t("tables.noTableBody")}</EmptyState>
				)}
				{table && table.cellCount === 0 && (
					<EmptyState title={t("tables.noCellsTitle")}>
						{t(countCells(catalogue, selection) > 0 ? "tables.noCellsBody" : "tables.noneSuchBody")}
					</EmptyState>
				)}
				{table && table.cellCount > 0 && <Told {...props} table={table} />}
			</div>
		</Section>
	);
}

function Told(props: ResultProps & { table: NonNullable<TablePage["table"]> }) {
	const { table, catalogue, notes, picture } = props;
	const { t } = useTranslation("dataroom");
	return (
		<>
			<TableNotes notes={notes} catalogue={catalogue} />
			{typeof table.charts === "string" ? (
				<p className="mb-4 max-w-prose text-sm text-quiet">
					{t(`tables.noChart.${table.charts}`, { max: tableLimits.drawn })}
				</p>
			) : (
				<Charts {...props} charts={table.charts} />
			)}
			{table.map && picture && <TableMapView map={table.map} picture={picture} catalogue={catalogue} />}
			<TableGrid {...props} />
			<TableDownloads {...props} />
		</>
	);
}

/** Charts of one table beside each other, on one scale where they are of one unit. */
function Charts({ charts, catalogue, selection }: ResultProps & { charts: TableChart[] }) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const { nameOf } = useTableNames(catalogue);
	const seasons = new Set(
		charts.flatMap((one) => (one.drawn.chart === "seasons" ? one.drawn.rows.map((row) => row.season) : [one.season])),
	);
	const undrawn = catalogue.releases.filter(
		({ number, season }) => selection.release.includes(number) && !seasons.has(season),
	);
	const besides = (unit: string) =>
		charts.flatMap(({ drawn }) =>
			drawn.chart === "seasons" || drawn.measure.unit !== unit ? [] : numbered(drawn.rows).flatMap(ends),
		);
	return (
		<>
			<div className={classes(charts.length > 1 && "grid gap-x-10 lg:grid-cols-2")}>
				{charts.map(({ key, ...chart }) => (
					<Chart key={key} {...chart} beside={besides(chart.drawn.measure.unit)} alone />
				))}
			</div>
			{undrawn.length > 0 && (
				<p className="mb-4 max-w-prose text-sm">
					{t("tables.undrawn", { releases: format.list(undrawn.map(({ number }) => nameOf("season", `${number}`))) })}
				</p>
			)}
		</>
	);
}

function Failed() {
	const { t } = useTranslation("dataroom");
	const { revalidate, state } = useRevalidator();
	return (
		<div role="alert">
			<Notice tone="attention" title={t("tables.failedTitle")}>
				<p className="mb-3">{t("tables.failedBody")}</p>
				<Button type="button" kind="secondary" busy={state === "loading"} onClick={() => void revalidate()}>
					{t("tables.retry")}
				</Button>
			</Notice>
		</div>
	);
}
