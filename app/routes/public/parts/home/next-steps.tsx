import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Section } from "#app/components/section.tsx";

/** Where to go from here, for each of those who come here. */
export function NextSteps() {
	const { t } = useTranslation("site");
	return (
		<Section title={t("next.title")}>
			<div className="grid gap-x-8 gap-y-6 md:grid-cols-3">
				<Step title={t("next.grower.title")}>
					<p>{t("next.grower.see")}</p>
					<p>{t("next.grower.answer")}</p>
					<Links
						links={[
							[href("/map"), t("public:home.openMap")],
							[href("/orchard"), t("next.grower.own")],
							[`${href("/about")}#asked`, t("next.grower.asked")],
							[href("/privacy"), t("next.grower.pledge")],
						]}
					/>
				</Step>
				<Step title={t("next.reader.title")}>
					<p>{t("next.reader.read")}</p>
					<Links
						links={[
							[href("/reports"), t("next.reader.reports")],
							[href("/subscribe"), t("next.reader.subscribe")],
							[href("/calendar"), t("state.calendar")],
						]}
					/>
				</Step>
				<Step title={t("next.researcher.title")}>
					<p>{t("next.researcher.take")}</p>
					<Links
						links={[
							[href("/data"), t("next.researcher.data")],
							[href("/api"), t("public:data.api")],
							[href("/methods"), t("next.researcher.methods")],
						]}
					/>
				</Step>
			</div>
		</Section>
	);
}

function Step({ title, children }: { title: string; children: ReactNode }) {
	return (
		<div className="border-t-2 border-line pt-3">
			<h3 className="text-base">{title}</h3>
			<div className="mt-2 grid gap-3">{children}</div>
		</div>
	);
}

function Links({ links }: { links: [to: string, label: string][] }) {
	return (
		<ul className="no-print list-none">
			{links.map(([to, label]) => (
				<li key={to}>
					<Link to={to} className="inline-flex min-h-9 items-center">
						{label}
					</Link>
				</li>
			))}
		</ul>
	);
}
