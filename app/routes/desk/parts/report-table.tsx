import { useTranslation } from "react-i18next";
import { Link } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { DeskReport } from "#app/publish/drafting/reports.server.ts";

type RowFacts =
	"reportId" | "releaseNumber" | "state" | "authorName" | "updatedAt" | "version" | "replacedBy" | "hasLater";
export type ReportRow = Pick<DeskReport, RowFacts> & { title: { en: string; es: string } };

export function toRow(report: DeskReport): ReportRow {
	const { reportId, releaseNumber, state, authorName, updatedAt, version, replacedBy, hasLater, content } = report;
	return { reportId, releaseNumber, state, authorName, updatedAt, version, replacedBy, hasLater, title: content.title };
}

export const reportTones = { draft: "neutral", submitted: "attention", scheduled: "good", published: "good" } as const;

type ReportTableProps = { rows: ReportRow[]; linkTo: (reportId: string) => string; empty: string };

/** Reports with where each stands, for desk and coordinator alike. */
export function ReportTable({ rows, linkTo, empty }: ReportTableProps) {
	const { t } = useTranslation("public");
	const columns = useColumns(linkTo);
	return (
		<DataTable
			caption={t("report_editor.listTitle")}
			captionHidden
			columns={columns}
			rows={rows}
			rowKey={(row) => row.reportId}
			empty={<p className="text-quiet">{empty}</p>}
		/>
	);
}

function useColumns(linkTo: ReportTableProps["linkTo"]): Column<ReportRow>[] {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	return [
		{
			key: "title",
			header: t("report_editor.title"),
			cell: (row) => (
				<Link to={linkTo(row.reportId)}>{wordsIn(row.title, i18n.language) || t("report_editor.untitled")}</Link>
			),
		},
		{
			key: "state",
			header: t("report_editor.state"),
			cell: ({ state, replacedBy, hasLater }) => (
				<>
					<StatusBadge tone={reportTones[state]}>{t(`report_editor.states.${state}`)}</StatusBadge>
					{replacedBy !== null && !hasLater && (
						<>
							{" "}
							<StatusBadge tone="attention">{t("report:look.badge")}</StatusBadge>
						</>
					)}
				</>
			),
		},
		{
			key: "version",
			header: t("report:versions.column"),
			numeric: true,
			cell: ({ version }) => format.number(version),
		},
		{
			key: "release",
			header: t("data.release"),
			numeric: true,
			cell: ({ releaseNumber }) => format.number(releaseNumber),
		},
		{ key: "author", header: t("report_editor.author"), cell: ({ authorName }) => authorName },
		{ key: "updated", header: t("report_editor.updated"), cell: ({ updatedAt }) => format.moment(updatedAt) },
	];
}
