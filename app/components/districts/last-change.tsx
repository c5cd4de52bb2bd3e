import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Confirm } from "#app/components/confirm.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type LastChangeProps = { change: { changedBy: string; changedAt: Date }; version: number; action: string };

/** Who redrew the districts last, with the way back. */
export function LastChange({ change, version, action: to }: LastChangeProps) {
	const { t } = useTranslation("districts");
	const format = useFormat();
	return (
		<Section title={t("last.title")}>
			<p>{t("last.said", { person: change.changedBy, moment: format.moment(change.changedAt) })}</p>
			<Form method="post" action={to} className="mt-3">
				<input type="hidden" name="seen" value={version} />
				<Confirm
					trigger={t("last.undo")}
					title={t("last.confirmTitle")}
					body={t("last.confirmBody")}
					confirmLabel={t("last.undo")}
					name="decision"
					value="undo"
				/>
			</Form>
		</Section>
	);
}
