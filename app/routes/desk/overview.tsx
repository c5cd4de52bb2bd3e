import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/overview";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { countDueCalls } from "#app/collect/calls.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { CountQuery } from "#app/collect/desk-lists.schema.ts";
import { countToWrite } from "#app/collect/invitations.server.ts";
import { countLateWaiting } from "#app/collect/late-answers.server.ts";
import { listCountyCounts } from "#app/collect/response-counts.server.ts";
import { listSurveys, type Survey } from "#app/collect/surveys.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { listReportWork } from "#app/publish/drafting/report-work.server.ts";
import { countOpenFindings } from "#app/review/findings.server.ts";
import { listReleaseWork } from "#app/release/release-work.server.ts";
import { CountyCounts } from "./parts/county-counts.tsx";
import { TodayList } from "./parts/today-list.tsx";

const closingSoonDays = 7;

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = CountQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const { viewer } = desk;
	return desk.transaction(async (trx) => {
		const surveys = await listSurveys(trx, viewer);
		const out = surveys.filter((survey) => survey.state === "open");
		const soon = Date.now() + closingSoonDays * 86_400_000;
		const open = [];
		for (const survey of out) {
			const mailings = await countToWrite(trx, viewer, survey.surveyId);
			const dueCalls = await countDueCalls(trx, viewer, survey.surveyId);
			open.push({ ...survey, mailings, dueCalls, closesSoon: survey.closesAt.getTime() <= soon });
		}
		const counted = open.find((survey) => survey.surveyId === query.survey) ?? open[0];
		return {
			open,
			toCheck: await listToCheck(trx, viewer, surveys),
			drafts: surveys.filter((survey) => survey.state === "draft"),
			late: (await countLateWaiting(trx, viewer)).flatMap(({ surveyId, waiting }) =>
				surveys.filter((survey) => survey.surveyId === surveyId).map((survey) => ({ ...survey, waiting })),
			),
			releases: await listReleaseWork(trx, viewer),
			reports: await listReportWork(trx, viewer),
			query,
			counts: counted && {
				surveyId: counted.surveyId,
				...(await listCountyCounts(trx, viewer, counted.surveyId, query)),
			},
		};
	});
}

/** The surveys with answers to check, how many each. */
async function listToCheck(trx: Trx, viewer: Associate, surveys: Survey[]) {
	const open = await countOpenFindings(trx, viewer);
	return surveys.flatMap(({ surveyId, season, title }) => {
		const count = open.get(surveyId) ?? 0;
		return count > 0 ? [{ surveyId, season, title, count }] : [];
	});
}

/** What needs doing today, then the surveys that are out with the answers in so far, by county. */
export default function Overview({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const format = useFormat();
	const { open, counts, query } = loaderData;
	const start = <ButtonLink to={href("/desk/surveys/new")}>{t("surveys.new")}</ButtonLink>;
	return (
		<Page title={t("overview.title")}>
			<TodayList {...loaderData} />
			{open.length === 0 && (
				<div className="mt-6">
					<EmptyState title={t("overview.emptyTitle")} action={start}>
						{t("overview.emptyBody")}
					</EmptyState>
				</div>
			)}
			{open.map((survey) => (
				<Section
					key={survey.surveyId}
					title={t("surveys.name", { title: wordsIn(survey.title, i18n.language), season: survey.season })}
				>
					<TallyCount count={survey.answered} of={survey.inFrame} label={t("survey.answersIn")} />
					<p className="mt-3">{t("overview.closes", { moment: format.moment(survey.closesAt, survey.timeZone) })}</p>
					<p className="mt-3 flex flex-wrap gap-x-6 gap-y-2">
						<Link to={href("/desk/surveys/:surveyId", { surveyId: survey.surveyId })}>{t("overview.go")}</Link>
						<Link to={href("/desk/surveys/:surveyId/responses", { surveyId: survey.surveyId })}>
							{t("overview.responses")}
						</Link>
					</p>
				</Section>
			))}
			{counts && <CountyCounts surveys={open} counts={counts} query={query} />}
		</Page>
	);
}
