import { useTranslation } from "react-i18next";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import type { RulesChange } from "#app/release/rules-change.ts";
import { ruleBounds, type RuleName } from "#app/release/rules.schema.ts";
import { digitsOf, ruleUnits, useRuleValue } from "./rule-words.ts";

type RuleFieldProps = {
	name: RuleName;
	stands: number | null;
	changes: RulesChange[];
	sent?: { values: FormValues; problems: Problem[] };
};

const optional = new Set<RuleName>(["largestOwners", "largestPercent", "publicFactor"]);

/** One setting: what it changes, an example, between what it lies, and who changed it last. */
export function RuleField({ name, stands, changes, sent }: RuleFieldProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const typed = sent?.values[name];
	const unit = ruleUnits[name];
	return (
		<TextField
			name={name}
			label={t(`settings.rule.${name}.label`)}
			help={<RuleHelp name={name} />}
			below={<LastChange name={name} changes={changes} />}
			suffix={unit && t(`settings.unit.${unit}`)}
			inputMode="decimal"
			size="short"
			optional={optional.has(name)}
			defaultValue={typeof typed === "string" ? typed : stands === null ? "" : format.number(stands, digitsOf(stands))}
			problem={sent?.problems.find((problem) => problem.field === name)}
		/>
	);
}

function RuleHelp({ name }: { name: RuleName }) {
	const { t } = useTranslation("network");
	const told = useRuleValue();
	const { least, most, whole } = ruleBounds[name];
	const bounds = { least: told(name, least), most: told(name, most) };
	return (
		<>
			{t(`settings.rule.${name}.help`)}
			<span className="mt-1 block">{t(`settings.rule.${name}.example`)}</span>
			<span className="mt-1 block">{whole ? t("settings.boundsWhole", bounds) : t("settings.bounds", bounds)}</span>
		</>
	);
}

function LastChange({ name, changes }: Pick<RuleFieldProps, "name" | "changes">) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const told = useRuleValue();
	const last = changes.find(({ moves }) => moves.some((move) => move.name === name));
	const move = last?.moves.find((one) => one.name === name);
	return (
		<p className="mt-1 text-sm text-quiet">
			{last && move
				? t("settings.lastChange", { who: last.setBy, day: format.dayOf(last.setAt), from: told(name, move.from) })
				: t("settings.neverChanged")}
		</p>
	);
}
