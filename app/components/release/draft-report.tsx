import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Figure } from "#app/components/figure.tsx";
import { Section } from "#app/components/section.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import type { Weighting } from "#app/collect/weighting.ts";
import type { MeasureCalibration } from "#app/estimate/calibration/weighed-survey.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { CalibrationTable } from "./calibration-table.tsx";
import { AuditTables, type AuditTablesProps } from "./audit-tables.tsx";

type Words = { en: string; es: string };
type ReportFigure = {
	measureKey: string;
	value: number | null;
	lower: number | null;
	upper: number | null;
	quartiles?: { first: number; third: number };
	steadiness: "steady" | "care" | "rough";
};
type ReportRow = {
	areaKey: string;
	name: string;
	parent: string;
	status: "shown" | "withheld" | "no_growers";
	reason: "own" | "shield" | "revision" | "other_survey" | "nobody_answered" | null;
	respondents: number | null;
	figures: ReportFigure[];
};
export type DraftReportProps = {
	audit: AuditTablesProps["audit"] & {
		passed: boolean;
		cells: number;
		withheldForOwnSake: number;
		shields: number;
		linearPrograms: number;
		seconds: number;
		gap: number | null;
		failures: { beyondHelp?: boolean }[];
		knownElsewhere: number;
	};
	rules: Record<"minimumOwners" | "dominancePercent" | "steadyCv" | "careCv" | "steadyDays" | "careDays", number>;
	asked: number;
	answered: number;
	setAside: number;
	weighting: Weighting;
	calibrations: MeasureCalibration[];
	joinCount: number;
	checksum: string | null;
	counts: { kind: string; shown: number; withheld: number; noGrowers: number }[];
	measures: ({ key: string; label: Words } & FigureShape)[];
	cropKeys: string[];
	rows: ReportRow[];
	choice: { crop: string; kind: string };
};

/** A draft as its reviewers read it: the audit, how much is withheld, and the figures that would be published. */
export function DraftReport(props: DraftReportProps) {
	const { t } = useTranslation("release");
	const calibrations = props.calibrations.filter(({ cropKey }) => cropKey === props.choice.crop);
	return (
		<>
			<Section title={t("audit.title")}>
				<AuditFacts {...props} />
				<AuditTables audit={props.audit} />
			</Section>
			<Section title={t("counts.title")}>
				<CountTable counts={props.counts} />
			</Section>
			<Section title={t("cells.title")}>
				<CellFilter cropKeys={props.cropKeys} choice={props.choice} />
				<CellTable {...props} />
			</Section>
			{calibrations.length > 0 && (
				<Section title={t("weighting.how.title")}>
					<p className="mb-4 max-w-prose">{t("weighting.how.body")}</p>
					<CalibrationTable calibrations={calibrations} measures={props.measures} />
				</Section>
			)}
		</>
	);
}

function AuditFacts({ audit, rules, asked, answered, setAside, joinCount, checksum, ...props }: DraftReportProps) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const room = audit.narrowest;
	const beyondHelp = audit.failures.filter((failure) => failure.beyondHelp).length;
	return (
		<DescriptionList
			items={[
				{
					term: t("audit.result"),
					detail: (
						<StatusBadge tone={audit.passed ? "good" : "stop"}>
							{t(audit.passed ? "audit.passed" : "audit.failed", { count: audit.failures.length })}
						</StatusBadge>
					),
				},
				...(beyondHelp === 0
					? []
					: [{ term: t("audit.beyondHelp"), detail: t("audit.beyondHelpDetail", { count: beyondHelp }) }]),
				...(audit.knownElsewhere === 0
					? []
					: [
							{
								term: t("audit.otherSurveys"),
								detail: t("audit.otherSurveysDetail", { count: audit.knownElsewhere }),
							},
						]),
				{
					term: t("audit.tried"),
					detail: t("audit.triedDetail", {
						programs: format.number(audit.linearPrograms),
						seconds: format.number(audit.seconds, 1),
					}),
				},
				{
					term: t("audit.narrowest"),
					detail: room === null ? t("audit.unbounded") : t("audit.narrowestDetail", { times: format.number(room, 2) }),
				},
				{
					term: t("audit.withheld"),
					detail: t("audit.withheldDetail", {
						own: format.number(audit.withheldForOwnSake),
						shields: format.number(audit.shields),
					}),
				},
				...(audit.gap === null
					? []
					: [
							{
								term: t("audit.least"),
								detail:
									audit.gap === 0
										? t("audit.leastProven")
										: t("audit.leastWithin", { percent: format.number(100 * audit.gap, 1) }),
							},
						]),
				{
					term: t("audit.rules"),
					detail: t("audit.rulesDetail", {
						owners: format.number(rules.minimumOwners),
						percent: format.number(rules.dominancePercent),
						steady: format.number(rules.steadyCv * 100),
						care: format.number(rules.careCv * 100),
						steadyDays: format.quantity(rules.steadyDays, "days"),
						careDays: format.quantity(rules.careDays, "days"),
					}),
				},
				{
					term: t("audit.answers"),
					detail: t("audit.answersDetail", {
						answered: format.number(answered),
						asked: format.number(asked),
						rate: format.number(asked === 0 ? 0 : (100 * answered) / asked),
					}),
				},
				{ term: t("audit.setAside"), detail: format.number(setAside) },
				{ term: t("audit.weights"), detail: useWeights(props) },
				{ term: t("audit.joins"), detail: format.number(joinCount) },
				{ term: t("audit.checksum"), detail: <code className="text-xs">{checksum ?? ""}</code> },
			]}
		/>
	);
}

function useWeights({ weighting, calibrations }: Pick<DraftReportProps, "weighting" | "calibrations">): string {
	const { t } = useTranslation("release");
	const format = useFormat();
	const name = t(`weighting.choice.${weighting}.name`);
	if (calibrations.length === 0) return name;
	return t("audit.weightsFitted", {
		name,
		smallest: format.number(Math.min(...calibrations.map(({ smallest }) => smallest)), 2),
		largest: format.number(Math.max(...calibrations.map(({ largest }) => largest)), 2),
		fitted: format.number(calibrations.filter(({ fallback }) => fallback === null).length),
		parts: format.number(calibrations.length),
	});
}

function CountTable({ counts }: Pick<DraftReportProps, "counts">) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const number = (key: "shown" | "withheld" | "noGrowers") => ({
		key,
		header: t(`counts.${key}`),
		numeric: true,
		cell: (row: DraftReportProps["counts"][number]) => format.number(row[key]),
	});
	return (
		<DataTable
			caption={t("counts.caption")}
			captionHidden
			rows={counts}
			rowKey={(row) => row.kind}
			columns={[
				{ key: "kind", header: t("counts.level"), cell: (row) => t(`common:areaKind.plural.${row.kind}`) },
				number("shown"),
				number("withheld"),
				number("noGrowers"),
			]}
		/>
	);
}

function CellFilter({ cropKeys, choice }: Pick<DraftReportProps, "cropKeys" | "choice">) {
	const { t } = useTranslation("release");
	return (
		<Form method="get" preventScrollReset className="mb-5 flex flex-wrap items-end gap-4">
			<ChoiceField
				kind="select"
				name="crop"
				legend={t("estimates.crop")}
				defaultValue={choice.crop}
				options={["all", ...cropKeys].map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
			/>
			<ChoiceField
				kind="select"
				name="kind"
				legend={t("estimates.level")}
				defaultValue={choice.kind}
				options={["region", "state", "district", "county"].map((kind) => ({
					value: kind,
					label: t(`common:areaKind.plural.${kind}`),
				}))}
			/>
			<Button kind="secondary">{t("estimates.show")}</Button>
		</Form>
	);
}

function CellTable({ rows, measures, choice }: DraftReportProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const columns: Column<ReportRow>[] = [
		{
			key: "area",
			header: t(`common:areaKind.${choice.kind}`),
			cell: (row) => (
				<>
					{row.name}
					{row.parent && <span className="block text-xs text-quiet">{row.parent}</span>}
				</>
			),
		},
		{ key: "status", header: t("cells.status"), cell: (row) => <CellStatus row={row} /> },
		{
			key: "answers",
			header: t("estimates.answers"),
			numeric: true,
			cell: (row) => (row.respondents === null ? "" : format.number(row.respondents)),
		},
		...measures.map((measure) => ({
			key: measure.key,
			header: wordsIn(measure.label, i18n.language),
			numeric: true,
			cell: (row: ReportRow) => {
				const figure = row.figures.find((one) => one.measureKey === measure.key);
				return <Figure status={row.status} {...figure} measure={measure} />;
			},
		})),
	];
	return (
		<DataTable
			caption={t("cells.caption", { crop: t(`common:crop.${choice.crop}`) })}
			rows={rows}
			rowKey={(row) => row.areaKey}
			columns={columns}
			empty={<p className="text-quiet">{t("cells.empty")}</p>}
		/>
	);
}

function CellStatus({ row }: { row: ReportRow }) {
	const { t } = useTranslation("release");
	if (row.status === "shown") return <StatusBadge tone="good">{t("cells.shown")}</StatusBadge>;
	return <StatusBadge tone="neutral">{t(`cells.reason.${row.reason ?? "own"}`)}</StatusBadge>;
}
