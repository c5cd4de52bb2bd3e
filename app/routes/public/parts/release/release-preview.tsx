import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";

/** The columns that a glance needs; the file has more. */
export const previewColumns = [
	...(["measure", "crop", "area_code", "area_name", "value", "standard_error"] as const),
	...(["lower", "upper", "respondents_band", "status"] as const),
] as const;
export type PreviewRow = Record<(typeof previewColumns)[number], string | number | null>;

const numbers = new Set<string>(["value", "standard_error", "lower", "upper"]);

/** The file's first rows as they stand in it, codes and all. */
export function ReleasePreview({ rows }: { rows: PreviewRow[] }) {
	const { t } = useTranslation("dataroom");
	const columns = previewColumns.map((name): Column<PreviewRow> => ({
		key: name,
		header: <code>{name}</code>,
		numeric: numbers.has(name),
		cell: (row) => (row[name] === null ? "" : String(row[name])),
	}));
	return (
		<DataTable
			caption={t("fileTable.preview")}
			columns={columns}
			rows={rows}
			rowKey={(row) => `${row.measure}|${row.crop}|${row.area_code}`}
		/>
	);
}
