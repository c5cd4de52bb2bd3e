import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/calendar";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { useToldText } from "#app/components/report/told-words.tsx";
import { Section } from "#app/components/section.tsx";
import { useTimeZone } from "#app/components/use-time-zone.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { listExpected } from "#app/publish/expected.server.ts";
import { listEveryRelease } from "#app/publish/releases.server.ts";
import { listToldReports } from "#app/publish/resolved-report.server.ts";
import { CalendarDays, type CalendarEntry } from "./parts/calendar/calendar-days.tsx";

export async function loader() {
	const [expected, releases, reports] = await Promise.all([listExpected(), listEveryRelease(), listToldReports()]);
	return {
		expected,
		releases: releases.map(({ number, season, title, publishedAt, withdrawn }) => ({
			number,
			season,
			title,
			publishedAt,
			withdrawnAt: withdrawn?.at ?? null,
		})),
		reports: reports.map(({ slug, version, title, publishedAt }) => ({ slug, version, title, publishedAt })),
	};
}

export default function Calendar({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("site");
	const zone = useTimeZone();
	const coming = useComing(loaderData);
	const past = usePast(loaderData);
	return (
		<Page title={t("calendar.title")} lead={t("calendar.lead")} width="narrow">
			<p className="text-sm text-quiet">{t(zone ? "calendar.clock" : "calendar.clockNetwork")}</p>
			<Section title={t("calendar.coming")}>
				{coming.length > 0 ? (
					<CalendarDays entries={coming} zone={zone} />
				) : (
					<EmptyState title={t("calendar.none")}>{t("calendar.noneBody")}</EmptyState>
				)}
			</Section>
			<Section title={t("calendar.past")}>
				{past.length > 0 ? (
					<CalendarDays entries={past} zone={zone} />
				) : (
					<EmptyState title={t("calendar.pastNone")}>{t("calendar.pastNoneBody")}</EmptyState>
				)}
			</Section>
			<Section title={t("calendar.rules.title")}>
				<ul className="list-disc space-y-2 pl-6">
					{(["same", "late", "revised", "changes"] as const).map((rule) => (
						<li key={rule}>{t(`calendar.rules.${rule}`)}</li>
					))}
				</ul>
				<p className="no-print mt-5">
					<ButtonLink to={href("/subscribe")} kind="secondary">
						{t("next.reader.subscribe")}
					</ButtonLink>
				</p>
			</Section>
		</Page>
	);
}

type Data = Route.ComponentProps["loaderData"];

function useComing({ expected }: Data): CalendarEntry[] {
	const { t, i18n } = useTranslation("site");
	const format = useFormat();
	return expected.map((one) => {
		const { kind, title, season, at, stateFips } = one;
		const states = format.list(stateFips.map((state) => t(`common:state.${state}`)));
		const told = { title: wordsIn(title, i18n.language), season, states };
		return { at, kind, word: t(`calendar.word.${kind}`), what: t(`calendar.${sentenceOf(one)}`, told) };
	});
}

function sentenceOf({ kind, again, stateFips }: Data["expected"][number]): string {
	if (kind === "survey_closes") return stateFips.length > 0 ? "closesIn" : "closes";
	if (kind === "release") return again ? "releaseAgain" : "release";
	return again ? "reportAgain" : "report";
}

/** What came out and what was taken back, the latest first. */
function usePast({ releases, reports }: Data): CalendarEntry[] {
	const { t, i18n } = useTranslation("site");
	const toldText = useToldText();
	const figures = releases.flatMap(({ number, season, title, publishedAt, withdrawnAt }): CalendarEntry[] => {
		const told = { number, season, title: wordsIn(title, i18n.language) };
		const linked = (text: string) => <Link to={href("/data/:release", { release: `${number}` })}>{text}</Link>;
		const out: CalendarEntry = {
			at: publishedAt,
			kind: "out",
			word: t("calendar.word.out"),
			what: linked(t("public:data.named", told)),
		};
		if (withdrawnAt === null) return [out];
		const word = t("calendar.word.withdrawn");
		return [out, { at: withdrawnAt, kind: "withdrawn", word, what: linked(t("calendar.withdrawn", told)) }];
	});
	const told = reports.map(({ slug, version, title, publishedAt }): CalendarEntry => {
		const name = toldText(title);
		return {
			at: publishedAt,
			kind: "told",
			word: t("calendar.word.told"),
			what: (
				<Link to={href("/reports/:slug", { slug })}>
					{version > 1 ? t("calendar.version", { title: name, version }) : name}
				</Link>
			),
		};
	});
	return [...figures, ...told].toSorted((a, b) => (a.at < b.at ? 1 : -1));
}
