import { useTranslation } from "react-i18next";
import { data, href, Link, redirect } from "react-router";
import type { Route } from "./+types/report";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decideReport, networkTimeZone } from "#app/jobs/decide-report.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { ReportDecision } from "#app/publish/drafting/decision.schema.ts";
import { listComments } from "#app/publish/drafting/report-comments.server.ts";
import { listFileStates } from "#app/publish/drafting/report-files.server.ts";
import { findReport, isOwn, needsLook } from "#app/publish/drafting/reports.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { Comments } from "#app/routes/desk/parts/report-comments.tsx";
import { StillTyped } from "#app/routes/desk/parts/report-notices.tsx";
import { ReportPreview } from "#app/routes/desk/parts/report-preview.tsx";
import { takeComment } from "#app/routes/desk/parts/report-steps.server.ts";
import { PhotosToTakeAway } from "./parts/photos-to-take-away.tsx";
import { ReportDecisions, useDecisionLabels } from "./parts/report-decisions.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const found = await network.transaction(async (trx) => {
		const report = await findReport(trx, network.viewer, params.reportId);
		if (!report) return undefined;
		return {
			report,
			comments: await listComments(trx, network.viewer, report.reportId),
			files: await listFileStates(trx, report.reportId),
		};
	});
	const release = found && (await findReleaseById(found.report.releaseId));
	if (!found || !release) throw refusal("report_not_found");
	return {
		...found,
		own: isOwn(found.report, network.viewer),
		needsLook: needsLook(found.report),
		tomorrow: wallClockOf(new Date(Date.now() + 86_400_000), networkTimeZone).on,
		told: await resolveReport(found.report.content, release),
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const sent = await request.formData();
	const intent = sent.get("intent");
	if (intent === "comment" || intent === "resolve") return takeComment(network, params.reportId, sent);
	const form = parseForm(ReportDecision, sent);
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const decided = await network.transaction((trx) =>
		decideReport(trx, network.viewer, params.reportId, form.value, new Date()),
	);
	if ("problem" in decided) return data({ values: form.values, problems: [decided.problem] }, { status: 400 });
	const { outcome } = decided;
	if (outcome === "not_found") throw refusal("report_not_found");
	context.get(sessionContext).flash("toast", { key: `public:report_review.outcome.${outcome}` });
	return redirect(href("/network/reports/:reportId", { reportId: params.reportId }), 303);
}

export default function NetworkReport({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	const { report, told, own, comments, tomorrow } = loaderData;
	const { releaseNumber, authorName, submittedAt, publishAt, state, correction } = report;
	return (
		<Page
			title={wordsIn(report.content.title, i18n.language)}
			lead={t("report_editor.onRelease", { number: releaseNumber, author: authorName })}
		>
			<ErrorSummary problems={actionData?.problems} labels={useDecisionLabels()} />
			{loaderData.needsLook && (
				<Notice tone="attention" title={t("report:look.title")}>
					{t("report:look.body", { number: report.replacedBy })}
				</Notice>
			)}
			{state === "draft" && <Notice tone="info">{t("report_review.stillDraft")}</Notice>}
			{state === "published" && (
				<Notice tone="info">
					{t("report_editor.isPublished")}{" "}
					<Link to={href("/reports/:slug", { slug: report.slug })}>{t("report_editor.seePublished")}</Link>
				</Notice>
			)}
			{state !== "published" && <StillTyped report={report} />}
			{state === "submitted" && submittedAt && (
				<div className="mb-4 max-w-prose">
					<p>{t("report_review.submitted", { moment: format.moment(submittedAt) })}</p>
					<p>{t("report_review.bothLanguages")}</p>
				</div>
			)}
			{state === "scheduled" && publishAt && (
				<Notice tone="info">{t("report:schedule.waits", { moment: format.moment(publishAt) })}</Notice>
			)}
			{loaderData.files.some(({ problem }) => problem === "no_browser") && (
				<Notice tone="attention" title={t("report:pdf.missing")}>
					{t("report:pdf.noBrowser")}
				</Notice>
			)}
			<Comments
				comments={comments}
				blocks={report.content.blocks}
				sent={actionData}
				open={state === "draft" || state === "submitted"}
			/>
			{correction && (
				<Notice tone="info" title={t("report:correction.label")}>
					{wordsIn(correction, i18n.language)}
				</Notice>
			)}
			<PhotosToTakeAway reportId={report.reportId} blocks={told.blocks} />
			<ReportPreview area="network" told={told} published={state === "published"} />
			<ReportDecisions state={state} own={own} tomorrow={tomorrow} sent={actionData} />
		</Page>
	);
}
