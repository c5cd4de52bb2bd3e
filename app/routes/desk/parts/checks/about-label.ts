import { useTranslation } from "react-i18next";
import { wordsIn } from "#app/i18n/language.ts";
import type { AboutShown } from "./queue.server.ts";

/** What an answer is called: its question, and of which planting it was told. */
export function useAboutLabel() {
	const { t, i18n } = useTranslation();
	return ({ label, planting }: Pick<AboutShown, "label" | "planting">): string => {
		const question = wordsIn(label, i18n.language);
		if (!planting) return question;
		const crop = t(`crop.${planting.cropKey}`);
		return `${question} (${planting.cultivar ? `${crop}: ${planting.cultivar}` : crop})`;
	};
}
