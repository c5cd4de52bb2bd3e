import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";

/** The survey closed while it was being answered: what that means for what is still sent. */
export function LateNotice() {
	const { t } = useTranslation("grower");
	return (
		<Notice tone="attention" title={t("late.title")}>
			{t("late.body")}
		</Notice>
	);
}
