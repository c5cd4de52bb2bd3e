import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookWords } from "#app/lib/figure-words.ts";
import type { CellChange } from "#app/publish/cell-changes.server.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

type ChangesTableProps = { changes: CellChange[]; measures: ReleaseMeasure[] };

/** Figures that two editions tell differently, as either tells them. */
export function ChangesTable({ changes, measures }: ChangesTableProps) {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	const areaName = useAreaName();
	const measureOf = new Map(measures.map((measure) => [measure.key, measure]));
	const measureName = (measureKey: string | null) => {
		const measure = measureOf.get(measureKey ?? "");
		return measure ? wordsIn(measure.label, i18n.language) : t("data.changes.wholeCell");
	};
	const told = (change: CellChange, when: "before" | "after") =>
		lookWords(change[when], measureOf.get(change.measureKey ?? ""), t, format);
	const columns: Column<CellChange>[] = [
		{
			key: "area",
			header: t("data.changes.area"),
			// What it is of in one column, so that both figures have room beside it on a phone.
			cell: ({ areaKey, areaName: name, areaKind, cropKey, measureKey }) => (
				<>
					{areaName({ areaKey, areaName: name, kind: areaKind })}
					<span className="block font-normal text-quiet">{t(`common:crop.${cropKey}`)}</span>
					<span className="block font-normal text-quiet">{measureName(measureKey)}</span>
				</>
			),
		},
		{ key: "before", header: t("data.changes.before"), numeric: true, cell: (change) => told(change, "before") },
		{ key: "after", header: t("data.changes.after"), numeric: true, cell: (change) => told(change, "after") },
	];
	return (
		<DataTable
			caption={t("data.changes.caption")}
			columns={columns}
			rows={changes}
			rowKey={({ measureKey, cropKey, areaKey }) => `${measureKey ?? ""}|${cropKey}|${areaKey}`}
		/>
	);
}
