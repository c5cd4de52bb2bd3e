import { useTranslation } from "react-i18next";
import { href, Link, redirect, type ShouldRevalidateFunctionArgs } from "react-router";
import type { Route } from "./+types/report";
import { type Access, requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { Page } from "#app/components/page.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";
import { missingCautions } from "#app/publish/cautions.ts";
import { listComments } from "#app/publish/drafting/report-comments.server.ts";
import { startCorrection } from "#app/publish/drafting/report-correction.server.ts";
import { listFileStates } from "#app/publish/drafting/report-files.server.ts";
import { listReportPhotos } from "#app/publish/drafting/report-photos.server.ts";
import { findReport, needsLook } from "#app/publish/drafting/reports.server.ts";
import { findReleaseById, listAreas, listCrops, listMeasures } from "#app/publish/releases.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { Comments } from "./parts/report-comments.tsx";
import { ReportEditor } from "./parts/report-editor.tsx";
import { ReportNotices } from "./parts/report-notices.tsx";
import { ReportPreview } from "./parts/report-preview.tsx";
import { takeComment, takeEdit } from "./parts/report-steps.server.ts";
import { reportTones } from "./parts/report-table.tsx";
import { ReportViews } from "./parts/report-views.tsx";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const report = await findReport(trx, desk.viewer, params.reportId);
		if (!report) return undefined;
		const { reportId } = report;
		return {
			report,
			comments: await listComments(trx, desk.viewer, reportId),
			files: report.state === "published" ? await listFileStates(trx, reportId) : [],
			photos: await listReportPhotos(trx, desk.viewer, reportId),
		};
	});
	const release = found && (await findReleaseById(found.report.releaseId));
	if (!found || !release) throw refusal("report_not_found");
	const { report } = found;
	const preview = report.state !== "draft" || new URL(request.url).searchParams.get("view") === "preview";
	const [measures, crops, areas] = await Promise.all([
		listMeasures(release.releaseId),
		listCrops(release.releaseId),
		listAreas(release.releaseId),
	]);
	return {
		...found,
		needsLook: needsLook(report),
		offered: { measures: measures.map(({ key, label }) => ({ key, label })), crops, areas },
		cautionsAdded: missingCautions(report.content, measures),
		told: preview ? await resolveReport(report.content, release) : null,
	};
}

/** What is saved while somebody writes comes back as a word beside the form, which stays as it is. */
export function shouldRevalidate({ formData, defaultShouldRevalidate }: ShouldRevalidateFunctionArgs) {
	return formData?.get("intent") === "autosave" ? false : defaultShouldRevalidate;
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const sent = await request.formData();
	const intent = sent.get("intent");
	if (intent === "comment" || intent === "resolve") return takeComment(desk, params.reportId, sent);
	if (intent === "correct") return correct(desk, params.reportId);
	const answer = await takeEdit(desk, params.reportId, sent);
	if ("toast" in answer && answer.toast)
		context.get(sessionContext).flash("toast", { key: `public:report_editor.${answer.toast}` });
	return "address" in answer ? redirect(answer.address, 303) : answer;
}

async function correct(desk: Access<Associate>, reportId: string) {
	const started = await desk.transaction((trx) => startCorrection(trx, desk.viewer, reportId));
	if (started.outcome !== "started") throw refusal("report_not_found");
	return redirect(href("/desk/reports/:reportId", { reportId: started.reportId }), 303);
}

export default function DeskReport({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const { report, cautionsAdded, told, comments, photos } = loaderData;
	const offered = { ...loaderData.offered, photos };
	const title = wordsIn(report.content.title, i18n.language) || t("report_editor.untitled");
	const address = href("/desk/reports/:reportId", { reportId: report.reportId });
	const answer = actionData && "content" in actionData ? actionData : undefined;
	return (
		<Page
			title={title}
			lead={
				<>
					<StatusBadge tone={reportTones[report.state]}>{t(`report_editor.states.${report.state}`)}</StatusBadge>{" "}
					{t("report_editor.onRelease", { number: report.releaseNumber, author: report.authorName })}
				</>
			}
			actions={
				<div className="flex flex-wrap gap-x-6">
					<Link to={href("/desk/reports/:reportId/photos", { reportId: report.reportId })}>
						{t("report:photos.link")}
					</Link>
					<Link to={href("/desk/reports/:reportId/versions", { reportId: report.reportId })}>
						{t("report:edits.link")}
					</Link>
				</div>
			}
		>
			{report.state === "draft" && <ReportViews address={address} preview={told !== null} />}
			<ReportNotices {...loaderData} />
			<Comments
				comments={comments}
				blocks={report.content.blocks}
				sent={actionData}
				open={report.state !== "published"}
			/>
			{told ? (
				<ReportPreview told={told} published={report.state === "published"} />
			) : (
				<ReportEditor report={report} offered={offered} cautionsAdded={cautionsAdded} answer={answer} />
			)}
		</Page>
	);
}
