import { useTranslation } from "react-i18next";
import { ChoiceField, type Option } from "#app/components/choice-field.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import type { Area } from "#app/directory/areas.server.ts";
import { cropKeys } from "#app/directory/crops.ts";
import { answeredWhens, mailStates, type OperationQuery } from "#app/directory/operation.schema.ts";

const all = (label: string): Option => ({ value: "", label });

type GrowerFiltersProps = { query: OperationQuery; states: string[]; districts: Area[] };

/** What the list is narrowed to, sent by GET so that a link or a view keeps it. */
export function GrowerFilters({ query, states, districts }: GrowerFiltersProps) {
	const { t } = useTranslation("growers");
	const select = (name: "state" | "district" | "crop" | "answered" | "mail", options: Option[]) => (
		<ChoiceField
			kind="select"
			name={name}
			legend={t(`filter.${name}`)}
			// Another view has other filters: the boxes then begin anew.
			key={`${name} ${query[name]}`}
			defaultValue={query[name]}
			options={options}
		/>
	);
	return (
		<SearchBar key={query.q} label={t("filter.search")} defaultValue={query.q}>
			{states.length > 1 &&
				select("state", [
					all(t("filter.allStates")),
					...states.map((state) => ({ value: state, label: t(`common:state.${state}`) })),
				])}
			{districts.length > 0 &&
				select("district", [
					all(t("filter.allDistricts")),
					...districts.map(({ key, name, stateFips }) => ({
						value: key,
						label: name,
						group: t(`common:state.${stateFips}`),
					})),
				])}
			{select("crop", [
				all(t("common:crop.all")),
				...cropKeys.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) })),
			])}
			{select(
				"answered",
				answeredWhens.map((when) => ({ value: when, label: t(`filter.answeredWhen.${when}`) })),
			)}
			{select(
				"mail",
				mailStates.map((state) => ({ value: state, label: t(`filter.mailState.${state}`) })),
			)}
			<input type="hidden" name="sort" value={query.sort} />
			<input type="hidden" name="direction" value={query.direction} />
		</SearchBar>
	);
}
