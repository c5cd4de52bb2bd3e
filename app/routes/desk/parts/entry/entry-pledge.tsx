import { useTranslation } from "react-i18next";
import { CheckField } from "#app/components/check-field.tsx";
import { Pledge } from "#app/components/pledge.tsx";
import type { Problem } from "#app/lib/parse-form.ts";

/** What is read out before the first question, and stands on every paper form. */
export function EntryPledge({ isTicked, problems }: { isTicked: boolean; problems: Problem[] }) {
	const { t } = useTranslation("answered");
	return (
		<div className="mb-6 border border-rule bg-sheet p-4">
			<p className="font-bold">{t("grower:pledge.title")}</p>
			<div className="mb-3 text-sm">
				<Pledge />
			</div>
			<CheckField
				name="pledge"
				label={t("enter.pledge")}
				defaultChecked={isTicked}
				problem={problems.find(({ field }) => field === "pledge")}
			/>
		</div>
	);
}
