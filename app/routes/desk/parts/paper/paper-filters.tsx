import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { paperFilters, paperLanguages, type PaperQuery, paperSizes } from "#app/collect/paper-forms.schema.ts";
import type { PaperArea } from "#app/collect/paper-forms.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField, type Option } from "#app/components/choice-field.tsx";
import { countyName } from "#app/i18n/county-name.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { groupBy } from "#app/lib/group-by.ts";

type PaperFiltersProps = { query: PaperQuery; areas: PaperArea[]; isOne: boolean };

/** Whose forms, of where, in which language and on which paper. */
export function PaperFilters({ query, areas, isOne }: PaperFiltersProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	return (
		<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			{!isOne && (
				<ChoiceField
					kind="select"
					name="show"
					legend={t("paper.show")}
					defaultValue={query.show}
					options={paperFilters.map((value) => ({ value, label: t(`paper.filter.${value}`) }))}
				/>
			)}
			{areas.length > 0 && (
				<ChoiceField
					kind="select"
					name="area"
					legend={t("paper.area")}
					defaultValue={query.area}
					options={areaOptions(areas, t, format.number)}
				/>
			)}
			<ChoiceField
				kind="select"
				name="language"
				legend={t("paper.language")}
				defaultValue={query.language}
				options={paperLanguages.map((value) => ({ value, label: t(`paper.languages.${value}`) }))}
			/>
			<ChoiceField
				kind="select"
				name="size"
				legend={t("paper.size")}
				defaultValue={query.size}
				options={paperSizes.map((value) => ({ value, label: t(`paper.sizes.${value}`) }))}
			/>
			<Button kind="secondary">{t("rates.show")}</Button>
		</Form>
	);
}

/** All together, then every state with its districts and its counties, each with how many have not answered there. */
function areaOptions(areas: PaperArea[], t: TFunction<"answered">, number: (value: number) => string): Option[] {
	const optionOf = (value: string, name: string, of: PaperArea[], group?: string): Option => {
		const count = of.reduce((sum, { operations }) => sum + operations, 0);
		return { value, label: t("paper.inArea", { name, count, value: number(count) }), group };
	};
	const states = groupBy(areas, ({ stateFips }) => stateFips);
	return [
		optionOf("all", t("release:estimates.allStates"), areas),
		...[...states].flatMap(([stateFips, of]) => {
			const state = t(`common:state.${stateFips}`);
			const districts = groupBy(of, ({ districtKey }) => districtKey);
			districts.delete(null);
			return [
				optionOf(stateFips, t("paper.wholeState", { state }), of, state),
				...[...districts]
					.toSorted(([, a], [, b]) => a[0]!.districtName!.localeCompare(b[0]!.districtName!))
					.map(([key, within]) => optionOf(key!, within[0]!.districtName!, within, state)),
				...of.map((county) =>
					optionOf(county.countyFips, countyName(t, { ...county, name: county.countyName }), [county], state),
				),
			];
		}),
	];
}
