import { useTranslation } from "react-i18next";
import { unitOfFamily } from "#app/collect/quantity-unit.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf, type FigureShape, type Unit } from "#app/lib/format.ts";
import type { Odd } from "#app/review/odd-answers.ts";
import type { Moved } from "#app/review/save-findings.server.ts";
import type { MovedMeasure, ToldUnit } from "./queue.server.ts";

const unitOf: Record<NonNullable<ToldUnit>, Unit> = { ...unitOfFamily, percent: "percent" };

/** An amount in the kept unit of its question: whole where it is large, to a tenth or finer where it is small. */
export function useAmount() {
	const format = useFormat();
	return (value: number, unit: ToldUnit): string => {
		const decimals = Math.abs(value) >= 100 ? 0 : Math.min(1, decimalsOf(value));
		return unit === null || unit === "count"
			? format.number(value, decimals)
			: format.quantity(value, unitOf[unit], decimals);
	};
}

/** Why answers are odd, in a sentence. */
export function useToldWords() {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	const amount = useAmount();
	const times = (ratio: number) => format.number(ratio, ratio < 10 ? 2 : 0);
	return (told: Odd["told"], unit: ToldUnit): string => {
		switch (told.why) {
			case "lower":
			case "higher":
				return t(`told.${told.hard ? "hard" : "soft"}.${told.why}`, { limit: amount(told.limit, unit) });
			case "words":
				return wordsIn(told.words, i18n.language);
			case "sum":
				return t("told.sum", { total: format.quantity(told.total, "percent", decimalsOf(told.total)) });
			case "days_in_order":
				return t("told.daysInOrder");
			case "unit":
				return t(`told.unit.${told.against}`, {
					usual: amount(told.usual, unit),
					count: told.now,
					bushels: format.quantity(told.now, "bushels", decimalsOf(told.now)),
					pounds: amount(told.now * told.size, unit),
				});
			case "ratio":
				return t("told.ratio", {
					ratio: times(told.ratio),
					last: amount(told.last, unit),
					usual: times(told.centre),
				});
			case "unlike":
				return t(`told.unlike.${told.perPlant ? "perPlant" : "whole"}`, {
					value: amount(told.value, unit),
					median: amount(told.median, unit),
					count: told.used,
					used: format.number(told.used),
					area: t(`told.area.${told.area}`),
				});
		}
	};
}

/** Where the state's figure would move without the answer. */
export function useMovedWords() {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	return (moved: Moved, measure: MovedMeasure, season: number): { measure: string; change: string } => {
		const shape: FigureShape = { unit: measure.unit, decimals: measure.decimals + 1, season };
		const value = format.figure(moved.value, shape);
		const label = wordsIn(measure.label, i18n.language);
		if (moved.without === null) return { measure: label, change: t("moved.none", { value }) };
		return { measure: label, change: t("moved.to", { value, without: format.figure(moved.without, shape) }) };
	};
}
