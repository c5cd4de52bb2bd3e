import { useTranslation } from "react-i18next";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { helpContact } from "#app/lib/help-contact.ts";

/** When this statement was last held against the site. */
const lookedThroughOn = "2026-12-02";

export default function Accessibility() {
	const { t } = useTranslation("site");
	const format = useFormat();
	return (
		<Page title={t("accessibility.title")} lead={t("accessibility.lead")} width="narrow">
			<Section title={t("accessibility.tell.title")} id="tell">
				<p>{t("accessibility.tell.body")}</p>
				<p className="mt-3 font-bold">{t("about.contact", helpContact)}</p>
			</Section>
			<Section title={t("accessibility.made.title")}>
				<List
					lines={(["table", "keyboard", "scripts", "colour", "print", "pdf", "aloud"] as const).map((line) =>
						t(`accessibility.made.${line}`),
					)}
				/>
			</Section>
			<Section title={t("accessibility.known.title")}>
				<List lines={(["map", "data", "own", "photos"] as const).map((line) => t(`accessibility.known.${line}`))} />
			</Section>
			<Section title={t("accessibility.checked.title")}>
				<p>{t("accessibility.checked.automatic")}</p>
				<p className="mt-3">{t("accessibility.checked.people")}</p>
				<p className="mt-3 text-quiet">{t("accessibility.checked.date", { date: format.day(lookedThroughOn) })}</p>
			</Section>
		</Page>
	);
}

function List({ lines }: { lines: string[] }) {
	return (
		<ul className="list-disc space-y-2 pl-6">
			{lines.map((line) => (
				<li key={line}>{line}</li>
			))}
		</ul>
	);
}
