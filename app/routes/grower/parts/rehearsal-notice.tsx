import { useTranslation } from "react-i18next";
import { Notice } from "#app/components/notice.tsx";

/** What is answered here is tried out by an associate, and no grower's. */
export function RehearsalNotice() {
	const { t } = useTranslation("grower");
	return (
		<Notice tone="attention" title={t("rehearsal.title")}>
			{t("rehearsal.body")}
		</Notice>
	);
}
