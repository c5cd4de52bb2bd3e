import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/report";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { missingCautions } from "#app/publish/cautions.ts";
import { applyEdit, EditorForm } from "#app/publish/drafting/editing.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { listAreas, listCrops, listMeasures } from "#app/publish/releases.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { missingWords, tooLongWords } from "#app/publish/report.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { ReportEditor } from "./parts/report-editor.tsx";
import { ReportViews } from "./parts/report-views.tsx";
import { ReportPreview } from "./parts/report-preview.tsx";
import { reportTones } from "./parts/report-table.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const report = await desk.transaction((trx) => findReport(trx, desk.viewer, params.reportId));
	const release = report && (await findReleaseById(report.releaseId));
	if (!report || !release) throw refusal("report_not_found");
	const preview = report.state !== "draft" || new URL(request.url).searchParams.get("view") === "preview";
	const [measures, crops, areas] = await Promise.all([
		listMeasures(release.releaseId),
		listCrops(release.releaseId),
		listAreas(release.releaseId),
	]);
	return {
		report,
		offered: { measures: measures.map(({ key, label }) => ({ key, label })), crops, areas },
		cautionsAdded: missingCautions(report.content, measures),
		told: preview ? await resolveReport(report.content, release) : null,
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(EditorForm, await request.formData());
	// The page's own controls cannot make such a form: a forged or broken one, whose texts cannot be put back in place.
	if (!form.ok) throw refusal("form_not_understood");
	const report = await desk.transaction((trx) => findReport(trx, desk.viewer, params.reportId));
	if (!report) throw refusal("report_not_found");
	const [measures, crops] = await Promise.all([listMeasures(report.releaseId), listCrops(report.releaseId)]);
	const first = { measure: measures[0]?.key ?? "", crop: crops[0] ?? "all", area: "network" };
	const { content, at } = applyEdit(form.value, first);
	const { verb, blockId } = form.value.intent;
	const edit = verb === "overwrite" ? Number(blockId) || 0 : form.value.edit;
	const tooLong = tooLongWords(content);
	if (tooLong.length > 0) return data({ content, edit, problems: tooLong, conflict: null }, { status: 400 });

	const { saved, submitted } = await desk.transaction(async (trx) => {
		const outcome = await saveReport(trx, desk.viewer, params.reportId, edit, content);
		const handIn = outcome.outcome === "saved" && verb === "submit";
		return { saved: outcome, submitted: handIn ? await submitReport(trx, desk.viewer, params.reportId) : null };
	});
	if (saved.outcome === "conflict") return data({ content, edit, problems: [], conflict: saved.edit }, { status: 409 });
	if (saved.outcome === "saved" && submitted === "incomplete") {
		const problems = missingWords(content);
		return data({ content, edit: saved.edit, problems, conflict: null }, { status: 400 });
	}
	const address = href("/desk/reports/:reportId", { reportId: params.reportId });
	const key = saved.outcome === "not_draft" ? "notDraft" : submitted ? "submittedNow" : at ? null : "savedNow";
	if (key) context.get(sessionContext).flash("toast", { key: `public:report_editor.${key}` });
	return redirect(at ? `${address}#block-${at}` : address, 303);
}

export default function DeskReport({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const { report, offered, cautionsAdded, told } = loaderData;
	const title = wordsIn(report.content.title, i18n.language) || t("report_editor.untitled");
	const address = href("/desk/reports/:reportId", { reportId: report.reportId });
	return (
		<Page
			title={title}
			lead={
				<>
					<StatusBadge tone={reportTones[report.state]}>{t(`report_editor.states.${report.state}`)}</StatusBadge>{" "}
					{t("report_editor.onRelease", { number: report.releaseNumber, author: report.authorName })}
				</>
			}
		>
			{report.state === "draft" && <ReportViews address={address} preview={told !== null} />}
			{report.note && (
				<Notice tone="attention" title={t("report_editor.sentBack")}>
					{report.note}
				</Notice>
			)}
			{report.state === "submitted" && <Notice tone="info">{t("report_editor.waiting")}</Notice>}
			{report.state === "published" && (
				<Notice tone="info">
					{t("report_editor.isPublished")}{" "}
					<Link to={href("/reports/:slug", { slug: report.slug })}>{t("report_editor.seePublished")}</Link>
				</Notice>
			)}
			{told ? (
				<ReportPreview told={told} published={report.state === "published"} />
			) : (
				<ReportEditor report={report} offered={offered} cautionsAdded={cautionsAdded} answer={actionData} />
			)}
		</Page>
	);
}
