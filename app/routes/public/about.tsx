import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/about";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { isStanding } from "#app/publish/release.ts";
import { listCrops, listEveryRelease, listStatesByRelease } from "#app/publish/releases.server.ts";

export async function loader() {
	const [every, states] = await Promise.all([listEveryRelease(), listStatesByRelease()]);
	const latest = every.find(isStanding);
	return {
		releases: every.length,
		states: [...new Set(Object.values(states).flat())].toSorted(),
		crops: latest ? (await listCrops(latest.releaseId)).filter((crop) => crop !== "all") : [],
	};
}

export default function About({ loaderData: { releases, states, crops } }: Route.ComponentProps) {
	const { t } = useTranslation("site");
	const format = useFormat();
	const named = (keys: string[], kind: "state" | "crop") => format.list(keys.map((key) => t(`common:${kind}.${key}`)));
	return (
		<Page title={t("about.title")} lead={t("about.lead", { network: t("public:data.one.network") })} width="narrow">
			<Section title={t("about.what.title")}>
				<div className="grid gap-3">
					<p>{t("about.what.same")}</p>
					<p>{t("about.what.figures")}</p>
					<p className="font-bold">{t("about.what.never")}</p>
				</div>
			</Section>
			<Section title={t("about.who.title")}>
				<div className="grid gap-3">
					<p>{t("about.who.associates")}</p>
					<p>{t("about.who.coordinator")}</p>
				</div>
				<ul className="mt-4 list-disc space-y-1 pl-6">
					{states.length > 0 && <li>{t("about.who.states", { states: named(states, "state") })}</li>}
					{crops.length > 0 && <li>{t("about.who.crops", { crops: named(crops, "crop") })}</li>}
					<li>{t("about.who.languages")}</li>
					<li>
						{releases > 0
							? t("about.who.releases", { count: releases, value: format.number(releases) })
							: t("about.who.noReleases")}
					</li>
				</ul>
			</Section>
			<Section title={t("about.asked.title")} id="asked">
				<div className="grid gap-3">
					<p>{t("about.asked.how")}</p>
					<p className="font-bold">{t("about.contact", helpContact)}</p>
					<p>{t("about.asked.cost")}</p>
					<p>{t("about.asked.phone")}</p>
				</div>
			</Section>
			<Section title={t("about.more.title")}>
				<ul className="space-y-2">
					{(["methods", "privacy", "calendar", "accessibility"] as const).map((page) => (
						<li key={page}>
							<Link to={href(`/${page}`)}>{t(`about.more.${page}`)}</Link>
						</li>
					))}
				</ul>
			</Section>
		</Page>
	);
}
