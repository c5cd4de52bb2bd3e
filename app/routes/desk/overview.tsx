import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/overview";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { listSurveys } from "#app/collect/surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const surveys = await desk.transaction((trx) => listSurveys(trx, desk.viewer));
	return { open: surveys.filter((survey) => survey.state === "open") };
}

/** What needs doing today: the surveys that are out, with the answers in so far. */
export default function Overview({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const format = useFormat();
	const start = <ButtonLink to={href("/desk/surveys/new")}>{t("surveys.new")}</ButtonLink>;
	return (
		<Page title={t("overview.title")}>
			{loaderData.open.length === 0 && (
				<EmptyState title={t("overview.emptyTitle")} action={start}>
					{t("overview.emptyBody")}
				</EmptyState>
			)}
			{loaderData.open.map((survey) => (
				<Section
					key={survey.surveyId}
					title={t("surveys.name", { title: wordsIn(survey.title, i18n.language), season: survey.season })}
				>
					<TallyCount count={survey.answered} of={survey.inFrame} label={t("survey.answersIn")} />
					<p className="mt-3">{t("overview.closes", { moment: format.moment(survey.closesAt, survey.timeZone) })}</p>
					<p className="mt-3">
						<Link to={href("/desk/surveys/:surveyId", { surveyId: survey.surveyId })}>{t("overview.go")}</Link>
					</p>
				</Section>
			))}
		</Page>
	);
}
