import { useTranslation } from "react-i18next";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { FieldProblem, fieldId } from "#app/components/field-frame.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { isIn, type TableArea } from "#app/publish/tables/catalogue.ts";
import { tableLimits } from "#app/publish/tables/limits.ts";
import type { SelectionProblem } from "#app/publish/tables/selection.ts";
import { namedLike } from "#app/publish/table-rows.ts";
import { useTableLabels } from "./table-labels.ts";
import type { TablePage } from "./table-page.ts";
import { useTableNames } from "./table-names.ts";

type NamedAreasProps = Pick<TablePage, "catalogue" | "selection"> & { problem: SelectionProblem | undefined };

/** Areas that were chosen by name, and those that a search has found, to choose from. */
export function NamedAreas({ catalogue, selection, problem }: NamedAreasProps) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const { nameOf } = useTableNames(catalogue);
	const legend = useTableLabels().area;
	const chosen = catalogue.areas.filter(({ key }) => selection.area.includes(key));
	const found = selection.q === "" ? [] : findAreas(catalogue.areas, selection.release, selection.q);
	const others = found.filter(({ key }) => !selection.area.includes(key));
	const listed = [...chosen, ...others.slice(0, tableLimits.found)];
	if (listed.length === 0) {
		return (
			<div id={fieldId("area")} tabIndex={-1}>
				<FieldProblem name="area" label={legend} problem={problem} />
				{selection.q !== "" && <p className="text-quiet">{t("tables.noneFound", { q: selection.q })}</p>}
			</div>
		);
	}
	return (
		<>
			<ChoiceField
				kind="checkbox"
				name="area"
				legend={legend}
				options={listed.map(({ key, kind }) => ({
					value: key,
					label: nameOf("area", key),
					help: kind === "county" ? undefined : t(`common:areaKind.${kind}`),
				}))}
				defaultValue={selection.area}
				problem={problem}
			/>
			{others.length > tableLimits.found && (
				<p className="text-quiet">
					{t("tables.moreFound", { shown: format.number(tableLimits.found), all: format.number(others.length) })}
				</p>
			)}
		</>
	);
}

const findAreas = (areas: TableArea[], releases: number[], q: string) =>
	namedLike(
		areas
			.filter((area) => releases.length === 0 || isIn(area, releases))
			.map((area) => ({ ...area, areaName: area.name })),
		q,
	);
