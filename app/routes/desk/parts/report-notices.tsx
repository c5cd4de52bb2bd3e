import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { Notice } from "#app/components/notice.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ReportFile } from "#app/publish/drafting/report-files.server.ts";
import type { DeskReport } from "#app/publish/drafting/reports.server.ts";
import { typedIn } from "#app/publish/report.ts";

/** Numbers that do not follow the release, to author and second person until the report is out. */
export function StillTyped({
	report: { content, correction },
}: {
	report: Pick<DeskReport, "content" | "correction">;
}) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const found = typedIn(content, correction);
	if (found.length === 0) return null;
	return <Notice tone="attention">{t("editor.stillTyped", { count: found.length, found: format.list(found) })}</Notice>;
}

type ReportNoticesProps = { report: DeskReport; needsLook: boolean; files: ReportFile[] };

/** Where a report stands, what is wanted of its author, and what became of its PDFs. */
export function ReportNotices({ report, needsLook, files }: ReportNoticesProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const { state, note, publishAt } = report;
	const unprinted = files.filter(({ problem }) => problem);
	return (
		<>
			{needsLook && (
				<Notice tone="attention" title={t("report:look.title")}>
					{t("report:look.body", { number: report.replacedBy })}
				</Notice>
			)}
			{note && (
				<Notice tone="attention" title={t("report_editor.sentBack")}>
					{note}
				</Notice>
			)}
			{state === "submitted" && <Notice tone="info">{t("report_editor.waiting")}</Notice>}
			{state === "submitted" && <StillTyped report={report} />}
			{state === "scheduled" && publishAt && (
				<Notice tone="info">{t("report:schedule.waits", { moment: format.moment(publishAt) })}</Notice>
			)}
			{unprinted.length > 0 && (
				<Notice tone="attention" title={t("report:pdf.missing")}>
					{t(unprinted[0]?.problem === "no_browser" ? "report:pdf.noBrowser" : "report:pdf.failed")}
				</Notice>
			)}
			{state === "published" && (
				<>
					<Notice tone="info">
						{t("report_editor.isPublished")}{" "}
						<Link to={href("/reports/:slug", { slug: report.slug })}>{t("report_editor.seePublished")}</Link>
					</Notice>
					<Form method="post" className="mb-6">
						<Confirm
							trigger={t("report:correction.start")}
							title={t("report:correction.startTitle")}
							body={t("report:correction.startBody")}
							confirmLabel={t("report:correction.start")}
							name="intent"
							value="correct"
						/>
					</Form>
				</>
			)}
		</>
	);
}
