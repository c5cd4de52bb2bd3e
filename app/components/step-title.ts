import { useTranslation } from "react-i18next";
import type { Words } from "#app/collect/form.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import { wordsIn } from "#app/i18n/language.ts";

type Titled = { screen: { title: Words }; planting: PlantingAsked | null };

/** A step's heading: the screen's title, with the planting it asks about. */
export function useStepTitle() {
	const { t, i18n } = useTranslation();
	return ({ screen, planting }: Titled): string => {
		const title = wordsIn(screen.title, i18n.language);
		if (!planting) return title;
		const crop = t(`crop.${planting.cropKey}`);
		const { cultivar } = planting;
		return t(cultivar ? "step.planting" : "step.crop", { title, crop, cultivar });
	};
}
