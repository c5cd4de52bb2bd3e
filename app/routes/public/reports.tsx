import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/reports";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { useToldText } from "#app/components/report/told-words.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { listToldReports } from "#app/publish/resolved-report.server.ts";

export async function loader() {
	return { reports: await listToldReports() };
}

export default function Reports({ loaderData: { reports } }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const toldText = useToldText();
	return (
		<Page
			title={t("reports.title")}
			lead={t("reports.lead")}
			width="narrow"
			actions={
				<>
					<ButtonLink to={href("/subscribe")}>{t("report:page.subscribe")}</ButtonLink>
					<ButtonLink to={href("/reports.atom")} kind="secondary" reloadDocument>
						{t("report:page.feed")}
					</ButtonLink>
				</>
			}
		>
			{reports.length === 0 && (
				<EmptyState
					title={t("reports.none")}
					action={
						<ButtonLink to={href("/map")} kind="secondary">
							{t("home.openMap")}
						</ButtonLink>
					}
				>
					{t("reports.noneNext")}
				</EmptyState>
			)}
			<ul className="list-none">
				{reports.map((report) => (
					<li key={report.slug} className="border-t border-line py-5">
						<h2 className="text-xl">
							<Link to={href("/reports/:slug", { slug: report.slug })}>{toldText(report.title)}</Link>
						</h2>
						<p className="mt-2">{toldText(report.summary)}</p>
						<p className="mt-2 text-sm text-quiet">
							{t("report.byline", { date: format.dayOf(report.publishedAt), author: report.authorName })}
						</p>
					</li>
				))}
			</ul>
		</Page>
	);
}
