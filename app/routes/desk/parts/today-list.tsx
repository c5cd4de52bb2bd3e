import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Words } from "#app/lib/words.ts";

type Named = { surveyId: string; season: number; title: Words };
type OpenSurvey = Named & {
	closesAt: Date;
	timeZone: string;
	closesSoon: boolean;
	mailings: { toInvite: number; withoutAddress: number };
	dueCalls: number;
};
type TodayListProps = {
	toCheck: (Named & { count: number })[];
	open: OpenSurvey[];
	drafts: Named[];
	/** Surveys with answers that came after the closing, and how many of them wait. */
	late: (Named & { waiting: number })[];
	releases: (Named & { work: string })[];
	reports: { reportId: string; title: Words; work: string }[];
};
type Task = { key: string; to: string; text: string };

/** What needs the associate today, each as one sentence that leads to where it is done. */
export function TodayList(props: TodayListProps) {
	const { t } = useTranslation("desk");
	const tasks = useTasks(props);
	if (tasks.length === 0) return <p className="text-quiet">{t("overview.nothing")}</p>;
	return (
		<Section title={t("overview.todo")}>
			<ul className="border-t border-rule">
				{tasks.map(({ key, to, text }) => (
					<li key={key} className="flex items-center gap-3 border-b border-rule">
						<span aria-hidden="true" className="text-quince">
							◆
						</span>
						<Link to={to} className="inline-flex min-h-11 items-center py-2">
							{text}
						</Link>
					</li>
				))}
			</ul>
		</Section>
	);
}

const page = ({ surveyId }: Named) => href("/desk/surveys/:surveyId", { surveyId });

function useTasks({ open, toCheck, drafts, late, releases, reports }: TodayListProps): Task[] {
	const { t, i18n } = useTranslation("desk");
	const format = useFormat();
	const nameOf = ({ title, season }: Named) => t("surveys.name", { title: wordsIn(title, i18n.language), season });
	const counted = (key: "invite" | "withoutAddress", survey: Named, count: number) =>
		t(`overview.task.${key}`, { survey: nameOf(survey), count, value: format.number(count) });

	const ofOpen = open.flatMap((survey): (Task | false)[] => [
		survey.closesSoon && {
			key: `closes ${survey.surveyId}`,
			to: page(survey),
			text: t("overview.task.closesSoon", {
				survey: nameOf(survey),
				moment: format.moment(survey.closesAt, survey.timeZone),
			}),
		},
		survey.dueCalls > 0 && {
			key: `calls ${survey.surveyId}`,
			to: `${href("/desk/surveys/:surveyId/calls", { surveyId: survey.surveyId })}?show=due`,
			text: t("answered:calls.task", {
				survey: nameOf(survey),
				count: survey.dueCalls,
				value: format.number(survey.dueCalls),
			}),
		},
		survey.mailings.toInvite > 0 && {
			key: `invite ${survey.surveyId}`,
			to: page(survey),
			text: counted("invite", survey, survey.mailings.toInvite),
		},
		survey.mailings.withoutAddress > 0 && {
			key: `address ${survey.surveyId}`,
			to: `${page(survey)}/responses?show=no_address`,
			text: counted("withoutAddress", survey, survey.mailings.withoutAddress),
		},
	]);
	const ofChecks = toCheck.map((survey) => ({
		key: `check ${survey.surveyId}`,
		to: href("/desk/surveys/:surveyId/checks", { surveyId: survey.surveyId }),
		text: t("checks:overview", { survey: nameOf(survey), count: survey.count, value: format.number(survey.count) }),
	}));
	const ofDrafts = drafts.map((survey) => ({
		key: `open ${survey.surveyId}`,
		to: page(survey),
		text: t("overview.task.open", { survey: nameOf(survey) }),
	}));
	const ofLate = late.map((survey) => ({
		key: `late ${survey.surveyId}`,
		to: `${href("/desk/surveys/:surveyId/answered", { surveyId: survey.surveyId })}#late`,
		text: t("answered:late.task", {
			survey: nameOf(survey),
			count: survey.waiting,
			value: format.number(survey.waiting),
		}),
	}));
	const ofReleases = releases.map((survey) => ({
		key: `release ${survey.surveyId}`,
		to: href("/desk/surveys/:surveyId/release", { surveyId: survey.surveyId }),
		text: t(`overview.task.release.${survey.work}`, { survey: nameOf(survey) }),
	}));
	const ofReports = reports.map(({ reportId, title, work }) => ({
		key: `report ${reportId}`,
		to: href("/desk/reports/:reportId", { reportId }),
		text: t(`overview.task.report.${work}`, {
			title: wordsIn(title, i18n.language) || t("public:report_editor.untitled"),
		}),
	}));
	const ofSurveys = [...ofChecks, ...ofOpen.filter((task) => task !== false), ...ofDrafts, ...ofLate];
	return [...ofSurveys, ...ofReleases, ...ofReports];
}
