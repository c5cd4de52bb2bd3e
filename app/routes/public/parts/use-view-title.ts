import { useTranslation } from "react-i18next";
import { wordsIn } from "#app/i18n/language.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

type Titled = {
	measure: ReleaseMeasure;
	cropKey: string;
	state: string | null;
	/** One season or two, the earlier first. */
	shown: { release: { season: number } }[];
};

/** What a view of the map shows: "Crop loss, Apple, 2025", for two seasons or one state also. */
export function useViewTitle() {
	const { t, i18n } = useTranslation("public");
	return ({ measure, cropKey, state, shown }: Titled): string => {
		const [earlier, later] = shown.map(({ release }) => release.season);
		const title = t("map.shown", {
			measure: wordsIn(measure.label, i18n.language),
			crop: t(`common:crop.${cropKey}`),
			season: later === undefined ? earlier : t("map.two.seasons", { earlier, later }),
		});
		return state === null ? title : t("map.inState", { title, state: t(`common:state.${state}`) });
	};
}
