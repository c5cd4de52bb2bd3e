import { useTranslation } from "react-i18next";

type Area = { areaName: string; kind?: string; stateFips?: string | null };

/** An area's name where it stands alone: counties of one name lie in several states, so "Story County, Iowa". */
export function useAreaName() {
	const { t } = useTranslation();
	return ({ areaName, kind, stateFips }: Area): string =>
		kind === "county" && stateFips
			? t("public:area.county", { name: areaName, state: t(`common:state.${stateFips}`) })
			: areaName;
}
