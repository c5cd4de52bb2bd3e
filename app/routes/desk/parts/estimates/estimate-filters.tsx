import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Words } from "#app/lib/words.ts";
import { areaLevels, type EstimatesQuery, steadinessChoices } from "./estimates.schema.ts";

type EstimateFiltersProps = {
	query: EstimatesQuery;
	crops: string[];
	states: string[];
	measureChoices: { key: string; label: Words }[];
};

/** What the table is narrowed to, sent by GET so that a link keeps it. */
export function EstimateFilters({ query, crops, states, measureChoices }: EstimateFiltersProps) {
	const { t, i18n } = useTranslation("release");
	const levels = areaLevels.filter((level) => level !== "region" || states.length > 1);
	const selects = {
		crop: crops.map((crop) => [crop, t(`common:crop.${crop}`)]),
		measure: [
			["all", t("estimates.allMeasures")],
			...measureChoices.map(({ key, label }) => [key, wordsIn(label, i18n.language)]),
		],
		level: levels.map((level) => [level, t(`estimates.levels.${level}`)]),
		state: [["all", t("estimates.allStates")], ...states.map((state) => [state, t(`common:state.${state}`)])],
		steadiness: steadinessChoices.map((one) => [
			one,
			t(one === "all" ? "estimates.anySteadiness" : `common:steadiness.${one}`),
		]),
	} as Record<"crop" | "measure" | "level" | "state" | "steadiness", [string, string][]>;
	return (
		<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			{(["crop", "measure", "level", "state", "steadiness"] as const)
				.filter((name) => name !== "state" || states.length > 1)
				.map((name) => (
					<ChoiceField
						key={name}
						kind="select"
						name={name}
						legend={t(`estimates.${name}`)}
						defaultValue={query[name]}
						options={selects[name].map(([value, label]) => ({ value, label }))}
					/>
				))}
			<input type="hidden" name="sort" value={query.sort} />
			<input type="hidden" name="direction" value={query.direction} />
			<Button kind="secondary">{t("estimates.show")}</Button>
		</Form>
	);
}
