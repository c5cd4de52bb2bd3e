import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { inputClasses } from "#app/components/field-frame.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { type ClassWay, classWays } from "#app/publish/class-steps.ts";
import type { Words } from "#app/lib/words.ts";

export type MapFormData = {
	release: { number: number };
	/** The release drawn beside it. */
	beside: number | null;
	measure: { key: string };
	cropKey: string;
	kind: string;
	way: ClassWay;
	states: string[];
	/** The state that the map is zoomed to. */
	state: string | null;
	measures: { key: string; label: Words }[];
	crops: string[];
	releases: { number: number; season: number; title: Words }[];
};
type MapFormProps = { map: MapFormData; chosen: string | null };

/** Every choice of the map in one form sent by GET, so that its address reproduces the view. */
export function MapForm({ map, chosen }: MapFormProps) {
	const { t, i18n } = useTranslation("public");
	const key = `${map.release.number} ${map.measure.key} ${map.cropKey} ${map.kind} ${map.beside} ${map.way} ${map.state}`;
	const measures = map.measures.map(({ key: value, label }) => ({ value, label: wordsIn(label, i18n.language) }));
	const releases = map.releases.map(({ number, season, title }) => ({
		value: `${number}`,
		label: t("map.form.release", { season, title: wordsIn(title, i18n.language), number }),
	}));
	return (
		<Form
			key={key}
			method="get"
			preventScrollReset
			className="mb-6 grid grid-cols-2 items-end gap-3 border-y border-rule py-4 sm:flex sm:flex-wrap"
		>
			<Choice name="measure" label={t("map.form.measure")} value={map.measure.key} options={measures} />
			<Choice
				name="crop"
				label={t("map.form.crop")}
				value={map.cropKey}
				options={map.crops.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
			/>
			<Choice name="release" label={t("map.form.season")} value={`${map.release.number}`} options={releases} />
			{map.releases.length > 1 && (
				<Choice
					name="beside"
					label={t("map.form.beside")}
					value={map.beside === null ? "" : `${map.beside}`}
					options={[
						{ value: "", label: t("map.form.noSeason") },
						...releases.filter(({ value }) => value !== `${map.release.number}`),
					]}
				/>
			)}
			<Choice
				name="kind"
				label={t("map.form.kind")}
				value={map.kind}
				options={["county", "district"].map((kind) => ({ value: kind, label: t(`common:areaKind.plural.${kind}`) }))}
			/>
			{map.states.length > 1 && (
				<Choice
					name="state"
					label={t("map.form.state")}
					value={map.state ?? ""}
					options={[
						{ value: "", label: t("map.form.allStates") },
						...map.states.map((state) => ({ value: state, label: t(`common:state.${state}`) })),
					]}
				/>
			)}
			<Choice
				name="classes"
				label={t("map.form.classes")}
				value={map.way}
				options={classWays.map((way) => ({ value: way, label: t(`map.form.way.${way}`) }))}
			/>
			{chosen && <input type="hidden" name="area" value={chosen} />}
			<Button>{t("map.form.show")}</Button>
		</Form>
	);
}

type ChoiceProps = {
	name: string;
	label: string;
	value: string;
	options: { value: string; label: string }[];
};

function Choice({ name, label, value, options }: ChoiceProps) {
	return (
		<div className="min-w-0">
			<label htmlFor={`field-${name}`} className="block text-sm font-bold">
				{label}
			</label>
			<select
				id={`field-${name}`}
				name={name}
				defaultValue={value}
				className={`${inputClasses()} mt-1 w-full sm:max-w-72`}
			>
				{options.map((option) => (
					<option key={option.value} value={option.value}>
						{option.label}
					</option>
				))}
			</select>
		</div>
	);
}
