import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { RuleMove } from "#app/release/rules-change.ts";
import type { RuleName } from "#app/release/rules.schema.ts";

/** What a setting is counted in; a bare number else. */
export const ruleUnits: Partial<Record<RuleName, "percent" | "days">> = {
	dominancePercent: "percent",
	largestPercent: "percent",
	steadyPercent: "percent",
	carePercent: "percent",
	steadyDays: "days",
	careDays: "days",
};

/** As many decimals as somebody typed, two at most. */
export const digitsOf = (value: number) =>
	[0, 1].find((digits) => Math.abs(value - Number(value.toFixed(digits))) < 1e-9) ?? 2;

/** A setting's value with its unit; an empty box in words. */
export function useRuleValue() {
	const { t } = useTranslation("network");
	const format = useFormat();
	return (name: RuleName, value: number | null) => {
		if (value === null) return t("settings.empty");
		const unit = ruleUnits[name];
		return unit ? format.quantity(value, unit, digitsOf(value)) : format.number(value, digitsOf(value));
	};
}

/** "Fewest owners: 4 instead of 5". */
export function useToldMove() {
	const { t } = useTranslation("network");
	const told = useRuleValue();
	return ({ name, from, to }: RuleMove) =>
		t("settings.move", { rule: t(`settings.rule.${name}.label`), from: told(name, from), to: told(name, to) });
}
