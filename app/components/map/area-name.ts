import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { countyName } from "#app/i18n/county-name.ts";
import { countyKind } from "#app/lib/county-kind.ts";
import { onceEach, sentencePattern } from "#app/lib/sentence-pattern.ts";

type Area = { areaKey: string; areaName: string; kind?: string };

export function useAreaName() {
	const { t } = useTranslation();
	return areaNamer(t);
}

/** An area's name where it stands alone: counties of one name lie in several states, so "Story County, Iowa". */
export function areaNamer(t: TFunction) {
	const nameLike = onceEach((_: string, countyFips: string) =>
		sentencePattern(["name"], ({ name }) => countyName(t, { name, countyFips })),
	);
	return ({ areaKey, areaName, kind }: Area): string =>
		kind === "county"
			? nameLike(`${areaKey.slice(0, 2)} ${countyKind(areaKey)}`, areaKey)({ name: areaName })
			: areaName;
}
