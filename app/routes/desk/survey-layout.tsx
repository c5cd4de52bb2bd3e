import { useTranslation } from "react-i18next";
import { href, Outlet } from "react-router";
import type { Route } from "./+types/survey-layout";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Tabs } from "#app/components/tabs.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const survey = await desk.transaction((trx) => findSurvey(trx, desk.viewer, params.surveyId));
	if (!survey) throw refusal("survey_not_found");
	const { title, season, state, rehearsalOf } = survey;
	return { title, season, isDraft: state === "draft", isRehearsal: rehearsalOf !== null };
}

export default function SurveyLayout({ loaderData, params }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const { title, season, isDraft, isRehearsal } = loaderData;
	// What a rehearsal never does: write a brief of its own, mail, release.
	const onlyReal = <T,>(items: T[]) => (isRehearsal ? [] : items);
	return (
		<Page title={t("surveys.name", { title: wordsIn(title, i18n.language), season })}>
			<Tabs
				label={t("survey.parts")}
				items={[
					{ to: href("/desk/surveys/:surveyId", params), label: t("survey.people"), end: true },
					...(isDraft || isRehearsal
						? [{ to: href("/desk/surveys/:surveyId/rehearsal", params), label: t("rehearsal.tab") }]
						: []),
					...onlyReal([
						{ to: href("/desk/surveys/:surveyId/brief", params), label: t("survey.brief") },
						{ to: href("/desk/surveys/:surveyId/mailing", params), label: t("survey.mailing") },
					]),
					{ to: href("/desk/surveys/:surveyId/answered", params), label: t("answered:tabs.rates") },
					{
						to: href("/desk/surveys/:surveyId/calls", params),
						label: t("answered:tabs.calls"),
						also: `${href("/desk/surveys/:surveyId", params)}/enter`,
					},
					{ to: href("/desk/surveys/:surveyId/responses", params), label: t("survey.responses") },
					{
						to: href("/desk/surveys/:surveyId/checks", params),
						label: t("checks:tab"),
						also: href("/desk/surveys/:surveyId/coding", params),
					},
					{ to: href("/desk/surveys/:surveyId/estimates", params), label: t("survey.estimates") },
					...onlyReal([{ to: href("/desk/surveys/:surveyId/release", params), label: t("survey.release") }]),
				]}
			/>
			{isRehearsal && (
				<Notice tone="attention" title={t("rehearsal.markTitle")}>
					{t("rehearsal.mark")}
				</Notice>
			)}
			<Outlet />
		</Page>
	);
}
