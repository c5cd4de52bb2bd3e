import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/reports";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { listReports } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import { listReleases } from "#app/publish/releases.server.ts";
import { ReportTable, toRow } from "./parts/report-table.tsx";
import { draftWords } from "./parts/report-words.server.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const [reports, releases] = await Promise.all([
		desk.transaction((trx) => listReports(trx, desk.viewer)),
		listReleases(),
	]);
	return {
		reports: reports.map(toRow),
		releases: releases.map(({ releaseId, number, season, title }) => ({ releaseId, number, season, title })),
	};
}

const StartForm = z.object({ release: z.uuid("choice_wrong") });

export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(StartForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const say = await draftWords();
	const reportId = await desk.transaction((trx) => startReport(trx, desk.viewer, form.value.release, say));
	if (!reportId) {
		const problems = [{ field: "release", code: "choice_wrong" }];
		return data({ values: form.value, problems }, { status: 400 });
	}
	context.get(sessionContext).flash("toast", { key: "public:report_editor.started" });
	return redirect(href("/desk/reports/:reportId", { reportId }), 303);
}

export default function DeskReports({ loaderData: { reports, releases }, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const problem = actionData?.problems[0];
	return (
		<Page title={t("report_editor.listTitle")} lead={t("report_editor.listLead")}>
			<ErrorSummary problems={actionData?.problems} labels={{ release: t("report_editor.release") }} />
			<Section title={t("report_editor.start")}>
				{releases.length === 0 ? (
					<EmptyState
						title={t("report_editor.noRelease")}
						action={<Link to={href("/desk/surveys")}>{t("report_editor.toSurveys")}</Link>}
					>
						{t("report_editor.noReleaseNext")}
					</EmptyState>
				) : (
					<Form method="post" className="max-w-xl">
						<ChoiceField
							kind="select"
							name="release"
							legend={t("report_editor.release")}
							help={t("report_editor.releaseHelp")}
							problem={problem}
							options={releases.map(({ releaseId, number, season, title }) => ({
								value: releaseId,
								label: t("data.named", { number, season, title: wordsIn(title, i18n.language) }),
							}))}
						/>
						<Button>{t("report_editor.startButton")}</Button>
					</Form>
				)}
			</Section>
			<Section title={t("report_editor.all")}>
				<ReportTable
					rows={reports}
					linkTo={(reportId) => href("/desk/reports/:reportId", { reportId })}
					empty={t("report_editor.none")}
				/>
			</Section>
		</Page>
	);
}
