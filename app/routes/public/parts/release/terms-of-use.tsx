import { useTranslation } from "react-i18next";
import { helpContact } from "#app/lib/help-contact.ts";
import { termKeys } from "#app/publish/terms.ts";

/** On what terms everybody may use the figures; a licence only where the network has named one. */
export function TermsOfUse({ license }: { license: string | null }) {
	const { t } = useTranslation("dataroom");
	return (
		<>
			<p className="mb-3 max-w-prose">{t("terms.lead")}</p>
			<ul className="max-w-prose list-disc pl-6">
				{termKeys.map((key) => (
					<li key={key} className="mb-2">
						{t(`terms.${key}`)}
					</li>
				))}
			</ul>
			<p className="mt-3 max-w-prose text-sm text-quiet">
				{license ? (
					<a href={license} rel="license">
						{t("terms.license")}
					</a>
				) : (
					t("terms.noLicense", { email: helpContact.email })
				)}
			</p>
		</>
	);
}
