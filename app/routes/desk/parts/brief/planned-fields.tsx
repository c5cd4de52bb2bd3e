import { useTranslation } from "react-i18next";
import { type PlannedFigure, plannedLevels } from "#app/collect/brief.ts";
import { plannedRows } from "#app/collect/brief.schema.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Problem } from "#app/lib/parse-form.ts";

type Typed = Partial<Record<"measureKey" | "cropKey" | "level" | "smallestN" | "largestCv", string>>;
type PlannedFieldsProps = {
	planned: readonly PlannedFigure[];
	/** What was sent and came back to be mended. */
	typed?: Typed[];
	problems?: Problem[];
	measures: { key: string; label: string }[];
	cropKeys: readonly string[];
};

/** Rows for the figures that a survey is to tell. A row without a measure is left empty. */
export function PlannedFields({ planned, typed, problems, measures, cropKeys }: PlannedFieldsProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const rows = Array.from({ length: plannedRows }, (_, at): Typed => {
		if (typed) return typed[at] ?? {};
		const one = planned[at];
		if (!one) return {};
		return {
			measureKey: one.measureKey,
			cropKey: one.cropKey,
			level: one.level,
			// As they were typed: what stands in a box is read anew.
			smallestN: String(one.smallestN ?? ""),
			largestCv: one.largestCv === null ? "" : String(Number((one.largestCv * 100).toFixed(6))),
		};
	});
	return rows.map((row, at) => {
		const name = (field: string) => `planned[${at}].${field}`;
		const problem = (field: string) => problems?.find((one) => one.field === name(field));
		return (
			// Rows are told apart by nothing but their place.
			// oxlint-disable-next-line react/no-array-index-key
			<fieldset key={at} className="mb-4 min-w-0 border-t border-rule pt-3">
				<legend className="pr-3 text-sm text-quiet">{t("brief.row", { number: format.number(at + 1) })}</legend>
				<div className="flex flex-wrap items-end gap-x-4 gap-y-2 *:mb-0 *:max-w-full">
					<ChoiceField
						kind="select"
						legend={t("brief.measure")}
						name={name("measureKey")}
						defaultValue={row.measureKey ?? ""}
						problem={problem("measureKey")}
						options={[
							{ value: "", label: t("brief.noMeasure") },
							...measures.map(({ key, label }) => ({ value: key, label })),
						]}
					/>
					<ChoiceField
						kind="select"
						legend={t("brief.crop")}
						name={name("cropKey")}
						defaultValue={row.cropKey ?? "all"}
						problem={problem("cropKey")}
						options={["all", ...cropKeys].map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
					/>
					<ChoiceField
						kind="select"
						legend={t("brief.level")}
						name={name("level")}
						defaultValue={row.level ?? "state"}
						problem={problem("level")}
						options={plannedLevels.map((key) => ({ value: key, label: t(`brief.levels.${key}`) }))}
					/>
					<TextField
						label={t("brief.smallestN")}
						name={name("smallestN")}
						defaultValue={row.smallestN}
						problem={problem("smallestN")}
						inputMode="numeric"
						size="short"
					/>
					<TextField
						label={t("brief.largestCv")}
						name={name("largestCv")}
						defaultValue={row.largestCv}
						problem={problem("largestCv")}
						inputMode="decimal"
						size="short"
						suffix="%"
					/>
				</div>
			</fieldset>
		);
	});
}
