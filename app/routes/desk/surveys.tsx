import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/surveys";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { listSurveys } from "#app/collect/surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const archived = new URL(request.url).searchParams.get("show") === "archived";
	const surveys = await desk.transaction((trx) => listSurveys(trx, desk.viewer, { archived }));
	return { archived, surveys };
}

const tones = { draft: "neutral", open: "attention", closed: "good" } as const;

export default function Surveys({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const format = useFormat();
	const start = <ButtonLink to={href("/desk/surveys/new")}>{t("surveys.new")}</ButtonLink>;
	return (
		<Page title={t("surveys.title")} lead={t("surveys.lead")} actions={start}>
			<p className="mb-4">
				{loaderData.archived ? (
					<Link to={href("/desk/surveys")}>{t("surveys.showCurrent")}</Link>
				) : (
					<Link to={`${href("/desk/surveys")}?show=archived`}>{t("surveys.showArchived")}</Link>
				)}
			</p>
			<DataTable
				caption={t("surveys.title")}
				captionHidden
				rows={loaderData.surveys}
				rowKey={(survey) => survey.surveyId}
				columns={[
					{
						key: "survey",
						header: t("surveys.survey"),
						cell: (survey) => (
							<Link to={href("/desk/surveys/:surveyId", { surveyId: survey.surveyId })}>
								{t("surveys.name", { title: wordsIn(survey.title, i18n.language), season: survey.season })}
							</Link>
						),
					},
					{
						key: "state",
						header: t("surveys.state"),
						cell: (survey) => (
							<StatusBadge tone={tones[survey.state]}>{t(`common:surveyState.${survey.state}`)}</StatusBadge>
						),
					},
					{
						key: "answered",
						header: t("surveys.answered"),
						numeric: true,
						cell: (survey) =>
							t("surveys.answeredOf", {
								answered: format.number(survey.answered),
								asked: format.number(survey.inFrame),
							}),
					},
					{
						key: "closes",
						header: t("surveys.closes"),
						cell: (survey) => format.moment(survey.closesAt, survey.timeZone),
					},
				]}
				empty={
					loaderData.archived ? (
						<EmptyState title={t("surveys.noneArchived")}>{t("surveys.noneArchivedBody")}</EmptyState>
					) : (
						<EmptyState title={t("surveys.emptyTitle")}>{t("surveys.emptyBody")}</EmptyState>
					)
				}
			/>
		</Page>
	);
}
