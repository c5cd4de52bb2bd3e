import { useTranslation } from "react-i18next";
import { logActions, logSubjects } from "#app/auth/log-actions.ts";
import { byLink, type LogQuery } from "#app/auth/log-query.ts";
import { ChoiceField, type Option } from "#app/components/choice-field.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Words } from "#app/lib/words.ts";
import { actionWords } from "./event-words.ts";

type LogFiltersProps = {
	query: LogQuery;
	people: { personId: string; name: string; email: string | null }[];
	surveys: { surveyId: string; season: number; title: Words }[];
};

/** What the log is narrowed to. Sent by GET, so that its address can be kept and passed on. */
export function LogFilters({ query, people, surveys }: LogFiltersProps) {
	const { t, i18n } = useTranslation("network");
	const everybody: Option[] = [
		{ value: "", label: t("log.anybody") },
		{ value: byLink, label: t("log.nobodySignedIn") },
		...people.map(({ personId, name, email }) => ({
			value: personId,
			label: email ? t("log.person", { name, email }) : name,
		})),
	];
	const every: Option[] = [
		{ value: "", label: t("log.anySurvey") },
		...surveys.map(({ surveyId, season, title }) => ({
			value: surveyId,
			label: t("log.survey", { title: wordsIn(title, i18n.language), season }),
		})),
	];
	return (
		<SearchBar label={t("log.search")} defaultValue={query.q}>
			<ChoiceField kind="select" name="show" legend={t("log.show")} defaultValue={query.show} options={useKinds()} />
			<ChoiceField kind="select" name="who" legend={t("log.who")} defaultValue={query.who} options={everybody} />
			<ChoiceField kind="select" name="survey" legend={t("log.ofSurvey")} defaultValue={query.survey} options={every} />
			<TextField type="date" name="from" label={t("log.from")} defaultValue={query.from} />
			<TextField type="date" name="to" label={t("log.until")} defaultValue={query.to} />
		</SearchBar>
	);
}

/** Every kind of act under its subject, and each subject as a whole. */
function useKinds(): Option[] {
	const { t } = useTranslation("network");
	return [
		{ value: "all", label: t("log.filter.all") },
		...logSubjects.flatMap((subject): Option[] => {
			const group = t(`log.filter.${subject}`);
			return [
				{ value: subject, label: t("log.allOf", { subject: group }), group },
				...logActions[subject].map((verb) => ({
					value: `${subject}.${verb}`,
					label: actionWords(`${subject}.${verb}`, t),
					group,
				})),
			];
		}),
	];
}
