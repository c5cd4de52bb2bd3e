import { useTranslation } from "react-i18next";
import { writeNumber } from "#app/collect/typed-number.ts";
import { TextField } from "#app/components/text-field.tsx";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

const fields = ["cultivar", "bearingTrees", "youngTrees", "areaAcres", "plantedYear"] as const;
type Field = (typeof fields)[number];
export type PlantingDefaults = Partial<Record<Field, string | number | null>>;

/** The labels of a planting's fields by the names they are sent under, for the summary of what needs mending. */
export function plantingLabels(t: (key: string) => string, prefixes: string[] = [""]): Record<string, string> {
	return Object.fromEntries(
		prefixes.flatMap((prefix) => fields.map((field) => [prefix + field, t(`plantings.field.${field}`)])),
	);
}

type PlantingFieldsProps = {
	/** What stands before each name, as "first." */
	prefix?: string;
	/** What stands in the boxes before anything was sent. */
	defaults?: PlantingDefaults;
	/** What was sent of these fields; it then stands in the boxes, right or wrong. */
	sent?: FormValues;
	problems?: Problem[];
};

/** What is told of one planting beside its crop. */
export function PlantingFields({ prefix = "", defaults, sent, problems }: PlantingFieldsProps) {
	const { t } = useTranslation("orchard");
	const box = (field: Field) => ({
		name: prefix + field,
		label: t(`plantings.field.${field}`),
		defaultValue: sent ? textOf(sent[field]) : shown(defaults?.[field]),
		problem: problems?.find((problem) => problem.field === prefix + field),
	});
	return (
		<>
			<TextField {...box("cultivar")} help={t("plantings.help.cultivar")} optional size="full" maxLength={100} />
			<TextField {...box("bearingTrees")} inputMode="numeric" size="short" />
			<TextField
				{...box("youngTrees")}
				help={t("plantings.help.youngTrees")}
				inputMode="numeric"
				size="short"
				optional
			/>
			<TextField {...box("areaAcres")} inputMode="decimal" size="short" suffix={t("common:unitName.acres")} optional />
			<TextField
				{...box("plantedYear")}
				help={t("plantings.help.plantedYear")}
				inputMode="numeric"
				size="short"
				optional
			/>
		</>
	);
}

/** The part of what was sent that stands under a prefix without its dot. */
export function partOf(values: FormValues | undefined, name: string): FormValues | undefined {
	const part = values?.[name];
	return typeof part === "object" && part !== null ? (part as FormValues) : values && {};
}

function textOf(value: unknown): string {
	return typeof value === "string" || typeof value === "number" ? String(value) : "";
}

/** A number as its box reads it back; a year is no amount. */
function shown(value: string | number | null | undefined): string {
	if (typeof value !== "number") return value ?? "";
	return writeNumber(Number(value.toFixed(3)));
}
