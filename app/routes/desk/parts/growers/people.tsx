import { useTranslation } from "react-i18next";
import type { Grantee } from "#app/auth/grantees.server.ts";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

/** Who signs in for the operation; a coordinator grants that. */
export function People({ people }: { people: Grantee[] }) {
	const { t } = useTranslation("growers");
	const format = useFormat();
	return (
		<Section title={t("people.title")}>
			{people.length === 0 ? (
				<p className="text-quiet">{t("people.none")}</p>
			) : (
				<DescriptionList
					items={people.map(({ name, email, since }) => ({
						term: name,
						detail: [email, t("people.since", { day: format.dayOf(since) })].filter(Boolean).join(" · "),
					}))}
				/>
			)}
		</Section>
	);
}
