import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ReportPhoto } from "#app/publish/drafting/report-photos.server.ts";

/** "Photo 2, consent of Ana Reyes, May 4, 2026": how the desk tells a report's photos apart. */
export function usePhotoName() {
	const { t } = useTranslation("report");
	const format = useFormat();
	return ({ consentOf, consentOn }: Pick<ReportPhoto, "consentOf" | "consentOn">, index: number): string =>
		t("photos.named", { number: format.number(index + 1), name: consentOf, date: format.day(consentOn) });
}
