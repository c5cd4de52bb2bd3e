import { useTranslation } from "react-i18next";
import { Link, useLocation, useParams } from "react-router";
import { useFormat } from "#app/i18n/use-format.ts";
import { classes } from "./classes.ts";
import { StatusBadge } from "./status-badge.tsx";

type BarSurvey = {
	surveyId: string;
	season: number;
	title: string;
	state: "draft" | "open" | "closed";
	isRehearsal: boolean;
};
type SeasonBarProps = { surveys: BarSurvey[]; stateFips: string[] };

const tones = { draft: "neutral", open: "good", closed: "neutral" } as const;

/** Which season, survey and states the desk is about: it stays while pages change, and opens to choose another survey. */
export function SeasonBar({ surveys, stateFips }: SeasonBarProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const { surveyId } = useParams();
	const { key } = useLocation();
	const current =
		surveys.find((survey) => survey.surveyId === surveyId) ??
		surveys.find((survey) => survey.state === "open") ??
		surveys[0];
	return (
		<section
			aria-label={t("seasonBar.label")}
			className="no-print sticky top-0 z-20 flex flex-wrap items-center gap-x-6 gap-y-1 border-b border-rule bg-ink px-gutter py-1 text-sm text-paper"
		>
			{current ? (
				// A new key closes the list once a survey was chosen.
				<details key={key} className="relative max-w-full">
					<summary className="inline-flex min-h-11 max-w-full items-center gap-3">
						<span className="text-lg font-bold">{current.season}</span>
						<span className="min-w-0 wrap-anywhere">{current.title}</span>
						{current.isRehearsal && <StatusBadge tone="attention">{t("seasonBar.rehearsal")}</StatusBadge>}
						<span aria-hidden="true">▾</span>
						<span className="sr-only">{t("seasonBar.choose")}</span>
					</summary>
					<SurveyList surveys={surveys} currentId={current.surveyId} />
				</details>
			) : (
				<p className="flex min-h-11 items-center">{t("seasonBar.none")}</p>
			)}
			<p>
				<span className="sr-only">{t("seasonBar.states")}: </span>
				{format.list(stateFips.map((state) => t(`state.${state}`)))}
			</p>
		</section>
	);
}

function SurveyList({ surveys, currentId }: { surveys: BarSurvey[]; currentId: string }) {
	const { t } = useTranslation();
	return (
		<ul className="absolute left-0 z-30 max-h-[70vh] w-[min(26rem,calc(100vw-2rem))] overflow-auto border-2 border-line bg-paper text-ink">
			{surveys.map((survey) => (
				<li key={survey.surveyId} className="border-b border-rule last:border-b-0">
					<Link
						to={`/desk/surveys/${survey.surveyId}`}
						aria-current={survey.surveyId === currentId ? "true" : undefined}
						className={classes(
							"flex min-h-11 items-center gap-3 px-4 py-2 text-ink no-underline hover:bg-sheet",
							survey.surveyId === currentId && "bg-damson-wash font-bold",
						)}
					>
						<span className="font-bold">{survey.season}</span>
						<span className="min-w-0 flex-1 wrap-anywhere">{survey.title}</span>
						{survey.isRehearsal && <StatusBadge tone="attention">{t("seasonBar.rehearsal")}</StatusBadge>}
						<StatusBadge tone={tones[survey.state]}>{t(`surveyState.${survey.state}`)}</StatusBadge>
					</Link>
				</li>
			))}
			<li>
				<Link to="/desk/surveys" className="flex min-h-11 items-center px-4 py-2">
					{t("seasonBar.all")}
				</Link>
			</li>
		</ul>
	);
}
