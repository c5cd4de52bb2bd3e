import { useTranslation } from "react-i18next";

/** What a planting is called: its crop, with the cultivar where one was told. */
export function usePlantingName() {
	const { t } = useTranslation();
	return ({ cropKey, cultivar }: { cropKey: string; cultivar: string }): string => {
		const crop = t(`crop.${cropKey}`);
		return cultivar ? t("cropAndCultivar", { crop, cultivar }) : crop;
	};
}
