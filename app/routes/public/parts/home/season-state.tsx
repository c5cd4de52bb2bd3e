import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Expected } from "#app/publish/expected.server.ts";
import type { Release } from "#app/publish/release.ts";

/** What is under way: surveys that take answers, and figures that have their minute. Nothing where nothing is. */
export function SeasonState({ expected }: { expected: Expected[] }) {
	const { t, i18n } = useTranslation("site");
	const format = useFormat();
	const open = expected.filter(({ kind }) => kind === "survey_closes");
	const soon = expected.filter(({ kind }) => kind === "release");
	const told = ({ title, season }: Expected) => ({ title: wordsIn(title, i18n.language), season });
	return (
		<>
			{open.length > 0 && (
				<Notice tone="info" title={t("state.openTitle")}>
					{open.map((survey) => {
						const states = format.list(survey.stateFips.map((state) => t(`common:state.${state}`)));
						const closes = format.moment(survey.at);
						const values = { ...told(survey), states, closes };
						return <p key={`${values.title}${survey.at}`}>{t(states ? "state.openIn" : "state.open", values)}</p>;
					})}
					<CalendarLink />
				</Notice>
			)}
			{soon.length > 0 && (
				<Notice tone="attention" title={t("state.soonTitle")}>
					{soon.map((release) => (
						<p key={`${release.season}${release.at}`}>
							{t("state.soon", { ...told(release), at: format.moment(release.at) })}
						</p>
					))}
					<CalendarLink />
				</Notice>
			)}
		</>
	);
}

function CalendarLink() {
	const { t } = useTranslation("site");
	return (
		<p className="no-print mt-2">
			<Link to={href("/calendar")}>{t("state.calendar")}</Link>
		</p>
	);
}

type Gone = Pick<Release, "number" | "season" | "title"> & { at: string };

/** The newest figures were withdrawn and none have come in their place. */
export function WithdrawnNotice({ gone, older }: { gone: Gone; older: boolean }) {
	const { t, i18n } = useTranslation("site");
	const format = useFormat();
	const { number, season, title, at } = gone;
	const values = { number, season, title: wordsIn(title, i18n.language), date: format.dayOf(at) };
	return (
		<Notice tone="caution" title={t("state.withdrawnTitle")}>
			<p>
				{t("state.withdrawn", values)} {older && t("state.withdrawnOlder")}
			</p>
			<p className="mt-2">
				<Link to={href("/data/:release", { release: `${number}` })}>{t("state.withdrawnLink")}</Link>
			</p>
		</Notice>
	);
}
