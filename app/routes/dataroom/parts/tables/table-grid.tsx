import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Paging } from "#app/components/paging.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { DataRecord } from "#app/publish/data-file.ts";
import type { TableRow } from "#app/publish/tables/layout.ts";
import type { ToldTable } from "#app/publish/tables/tell-table.ts";
import { measureOf } from "#app/publish/tables/views.ts";
import { TableFigure } from "./table-figure.tsx";
import { useTableNames } from "./table-names.ts";
import type { TablePage } from "./table-page.ts";

type GridProps = Pick<TablePage, "catalogue" | "selection"> & { table: ToldTable };

/** The table itself, a page of it. What is the same in every cell stands in its caption and not in each row. */
export function TableGrid({ catalogue, selection, table }: GridProps) {
	const { t } = useTranslation("dataroom");
	const names = useTableNames(catalogue);
	const parts = usePartColumns(catalogue);
	const varied = table.rowDimensions.filter((one) => !(one in table.same));
	// A row has a name in any case.
	const naming = varied.length > 0 ? varied : table.rowDimensions.slice(-1);
	const isLong = selection.layout === "long";
	const columns: Column<TableRow>[] = [
		...naming.map((one): Column<TableRow> => ({
			key: one,
			header: t(`tables.dimension.${one}`),
			cell: ({ at }) => names.nameOf(one, at[one] ?? ""),
		})),
		...table.columns.map(({ key, at }, index): Column<TableRow> => ({
			key: `figure ${key}`,
			header: names.textOf(at, table.same) || t("tables.figure"),
			cell: ({ cells }) => {
				const record = cells[index] ?? null;
				const measure = record && measureOf(catalogue, record);
				return <TableFigure record={record} measure={measure ?? undefined} show={isLong ? [] : selection.show} />;
			},
		})),
		...(isLong ? parts.filter(({ key }) => selection.show.some((one) => one === key)) : []),
	];
	return (
		<>
			<DataTable
				caption={names.textOf(table.same) || t("tables.caption")}
				columns={columns}
				rows={table.rows}
				rowKey={({ key }) => key}
			/>
			<Paging page={table.page} pageCount={table.pageCount} total={table.rowCount} />
			<p className="mt-3 max-w-prose text-sm text-quiet">{t("public:map.withheldWhy")}</p>
		</>
	);
}

const ofRecord =
	(tell: (record: DataRecord) => string) =>
	({ cells: [record] }: TableRow): string =>
		record ? tell(record) : "";

/** In a long table what stands beside a figure has a column of its own. */
function usePartColumns(catalogue: TablePage["catalogue"]): Column<TableRow>[] {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	return [
		{
			key: "error",
			header: t("tables.part.error"),
			numeric: true,
			cell: ofRecord((record) => {
				const measure = measureOf(catalogue, record);
				return measure && record.standard_error !== null ? format.spread(record.standard_error, measure) : "";
			}),
		},
		{
			key: "interval",
			header: t("tables.part.interval"),
			cell: ofRecord((record) => {
				const measure = measureOf(catalogue, record);
				const { lower, upper } = record;
				return measure && lower !== null && upper !== null ? format.range(lower, upper, measure) : "";
			}),
		},
		{
			key: "status",
			header: t("tables.part.status"),
			cell: ofRecord(({ status }) => t("tables.status", { code: status, name: t(`status.${status}.name`) })),
		},
	];
}
