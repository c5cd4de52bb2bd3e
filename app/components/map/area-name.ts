import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { onceEach, sentencePattern } from "#app/lib/sentence-pattern.ts";

type Area = { areaName: string; kind?: string; stateFips?: string | null };

export function useAreaName() {
	const { t } = useTranslation();
	return areaNamer(t);
}

/** An area's name where it stands alone: counties of one name lie in several states, so "Story County, Iowa". */
export function areaNamer(t: TFunction) {
	const countyOf = onceEach((stateFips: string) =>
		sentencePattern(["name"], ({ name }) => t("public:area.county", { name, state: t(`common:state.${stateFips}`) })),
	);
	return ({ areaName, kind, stateFips }: Area): string =>
		kind === "county" && stateFips ? countyOf(stateFips)({ name: areaName }) : areaName;
}
