import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { FigureCell, FigureInterval, FigureSteadiness, type TableMeasure, useSpread } from "./estimate-figure.tsx";
import type { BarScale, EstimateRow, Figure } from "./estimate-rows.ts";
import type { EstimatesQuery } from "./estimates.schema.ts";

type EstimateTableProps = {
	surveyId: string;
	query: EstimatesQuery;
	measures: TableMeasure[];
	rows: EstimateRow[];
	scales: Record<string, Record<string, BarScale>>;
	anyAnswer: boolean;
};

/** Areas by measures; of one measure alone, its numbers in columns of their own. */
export function EstimateTable(props: EstimateTableProps) {
	const { query, measures, rows, anyAnswer } = props;
	const { t } = useTranslation("release");
	const areaColumns = useAreaColumns(query);
	const oneMeasure = useMeasureColumns(props, measures[0]);
	const manyMeasures = useFigureColumns(props);
	const empty = anyAnswer ? "noMatch" : "empty";
	return (
		<DataTable
			caption={t("estimates.caption", { crop: t(`common:crop.${query.crop}`) })}
			rows={rows}
			rowKey={(row) => row.area.key}
			sort={{ key: query.sort, direction: query.direction }}
			columns={[...areaColumns, ...(query.measure === "all" ? manyMeasures : oneMeasure)]}
			empty={<EmptyState title={t(`estimates.${empty}Title`)}>{t(`estimates.${empty}Body`)}</EmptyState>}
		/>
	);
}

const indents = ["", "pl-2 sm:pl-4", "pl-4 sm:pl-8", "pl-6 sm:pl-12"];

function useAreaColumns({ level, sort }: EstimatesQuery): Column<EstimateRow>[] {
	const { t } = useTranslation("release");
	const format = useFormat();
	const asTree = level === "all" && sort === "area";
	return [
		{
			key: "area",
			header: t("estimates.area"),
			sortable: true,
			cell: ({ area }) => (
				<span className={asTree ? `block ${indents[area.depth]}` : undefined}>
					<span className={area.depth < 2 ? "font-bold" : undefined}>{area.name || t("estimates.ownStates")}</span>
					<span className="block text-xs text-quiet">
						{area.kind !== "region" && t(`common:areaKind.${area.kind}`)}
						{!asTree && area.parentName && `, ${area.parentName}`}
					</span>
				</span>
			),
		},
		{
			key: "respondents",
			header: t("estimates.answers"),
			numeric: true,
			sortable: true,
			cell: (row) => format.number(row.respondents),
		},
	];
}

type Making = Pick<EstimateTableProps, "surveyId" | "scales"> & { measures?: TableMeasure[] };

function useFigureColumns({ surveyId, scales, measures = [] }: Making): Column<EstimateRow>[] {
	const { t, i18n } = useTranslation("release");
	return measures.map((measure) => ({
		key: measure.key,
		header: wordsIn(measure.label, i18n.language),
		numeric: true,
		sortable: true,
		cell: (row) => {
			const figure = row.figures.find((one) => one.measureKey === measure.key);
			if (!figure) return <span className="text-quiet">{t("estimates.none")}</span>;
			return (
				<FigureCell
					figure={figure}
					measure={measure}
					scale={scales[measure.key]![row.area.kind]!}
					to={<FigureLink {...{ surveyId, figure, measure }} areaName={row.area.name} />}
				/>
			);
		},
	}));
}

function useMeasureColumns({ surveyId, scales }: Making, measure?: TableMeasure): Column<EstimateRow>[] {
	const { t, i18n } = useTranslation("release");
	const spread = useSpread();
	if (!measure) return [];
	const column = (key: string, header: string, cell: (figure: Figure, row: EstimateRow) => React.ReactNode) => ({
		key,
		header,
		numeric: key !== "steadiness",
		sortable: key !== "interval",
		cell: (row: EstimateRow) => {
			const [figure] = row.figures;
			if (figure && figure.respondents > 0) return cell(figure, row);
			return key === "value" ? t("estimates.none") : null;
		},
	});
	return [
		column("value", wordsIn(measure.label, i18n.language), (figure, row) => (
			<FigureLink {...{ surveyId, figure, measure }} areaName={row.area.name} />
		)),
		column("interval", t("estimates.interval"), (figure, row) => (
			<FigureInterval figure={figure} measure={measure} scale={scales[measure.key]![row.area.kind]!} />
		)),
		column("standardError", t("estimates.se"), (figure) => spread.standardError(figure, measure)),
		column("cv", t("estimates.cv"), (figure) => spread.cv(figure)),
		column("steadiness", t("estimates.steadiness"), (figure) => <FigureSteadiness figure={figure} />),
	];
}

type FigureLinkProps = { surveyId: string; figure: Figure; measure: TableMeasure; areaName: string };

/** The value, leading to how it was made. */
function FigureLink({ surveyId, figure, measure, areaName }: FigureLinkProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const { areaKey, cropKey, measureKey, value } = figure;
	const shown = value === null ? t("estimates.noBase") : format.figure(value, measure);
	return (
		<Link
			to={href("/desk/surveys/:surveyId/estimates/:areaKey/:cropKey/:measureKey", {
				surveyId,
				areaKey,
				cropKey,
				measureKey,
			})}
			className="relative inline-flex min-h-6 items-center font-bold"
		>
			{shown}
			<span className="sr-only">
				{t("estimates.howMade", {
					area: areaName || t("estimates.ownStates"),
					measure: wordsIn(measure.label, i18n.language),
				})}
			</span>
		</Link>
	);
}
