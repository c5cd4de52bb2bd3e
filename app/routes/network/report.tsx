import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/report";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { Confirm } from "#app/components/confirm.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findReport, isOwn, publishReport, sendReportBack } from "#app/publish/drafting/reports.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { ReportPreview } from "#app/routes/desk/parts/report-preview.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const report = await network.transaction((trx) => findReport(trx, network.viewer, params.reportId));
	const release = report && (await findReleaseById(report.releaseId));
	if (!report || !release) throw refusal("report_not_found");
	const { state, slug, authorName, releaseNumber, submittedAt, content } = report;
	return {
		report: {
			state,
			slug,
			authorName,
			releaseNumber,
			submittedAt,
			title: content.title,
			own: isOwn(report, network.viewer),
		},
		told: await resolveReport(content, release),
	};
}

const Decision = z.discriminatedUnion("intent", [
	z.object({ intent: z.literal("publish"), note: z.string().optional() }),
	z.object({ intent: z.literal("send_back"), note: z.string("empty").trim().min(1, "empty").max(4000, "too_long") }),
]);

export async function action({ context, params, request }: Route.ActionArgs) {
	const network = requireCoordinator(context);
	const form = parseForm(Decision, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const decision = form.value;
	const outcome = await network.transaction((trx) =>
		decision.intent === "publish"
			? publishReport(trx, network.viewer, params.reportId)
			: sendReportBack(trx, network.viewer, params.reportId, decision.note),
	);
	if (outcome === "not_found") throw refusal("report_not_found");
	context.get(sessionContext).flash("toast", { key: `public:report_review.outcome.${outcome}` });
	return redirect(href("/network/reports/:reportId", { reportId: params.reportId }), 303);
}

export default function NetworkReport({ loaderData: { report, told }, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	const { releaseNumber, authorName, submittedAt } = report;
	return (
		<Page
			title={wordsIn(report.title, i18n.language)}
			lead={t("report_editor.onRelease", { number: releaseNumber, author: authorName })}
		>
			<ErrorSummary problems={actionData?.problems} labels={{ note: t("report_review.note") }} />
			{report.state === "draft" && <Notice tone="info">{t("report_review.stillDraft")}</Notice>}
			{report.state === "published" && (
				<Notice tone="info">
					{t("report_editor.isPublished")}{" "}
					<Link to={href("/reports/:slug", { slug: report.slug })}>{t("report_editor.seePublished")}</Link>
				</Notice>
			)}
			{report.state === "submitted" && submittedAt && (
				<p className="mb-4">{t("report_review.submitted", { moment: format.moment(submittedAt) })}</p>
			)}
			<ReportPreview told={told} published={report.state === "published"} />
			{report.state === "submitted" && <DecisionForms own={report.own} answer={actionData} />}
		</Page>
	);
}

type DecisionFormsProps = { own: boolean; answer: Route.ComponentProps["actionData"] };

function DecisionForms({ own, answer }: DecisionFormsProps) {
	const { t } = useTranslation("public");
	const note = answer?.values.note;
	return (
		<Section title={t("report_review.decide")}>
			{own ? (
				<Notice tone="attention" title={t("report_review.outcome.own_report")}>
					{t("report_review.ownBody")}
				</Notice>
			) : (
				<Form method="post" className="mb-8">
					<Confirm
						trigger={t("report_review.publish")}
						title={t("report_review.publishTitle")}
						body={t("report_review.publishBody")}
						confirmLabel={t("report_review.publish")}
						name="intent"
						value="publish"
					/>
				</Form>
			)}
			<Form method="post" className="max-w-xl">
				<TextField
					name="note"
					label={t("report_review.note")}
					help={t("report_review.noteHelp")}
					multiline
					maxLength={4000}
					defaultValue={typeof note === "string" ? note : ""}
					problem={answer?.problems.find(({ field }) => field === "note")}
				/>
				<Button kind="secondary" name="intent" value="send_back">
					{t("report_review.sendBack")}
				</Button>
			</Form>
		</Section>
	);
}
