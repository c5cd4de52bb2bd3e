import { type DataColumn, type DataRecord, toCsv } from "../data-file.ts";
import type { TableCatalogue } from "./catalogue.ts";
import { type Address, layOut } from "./layout.ts";
import type { ShownPart, TableDimension, TableSelection } from "./selection.ts";

/** The columns of the files that name a row, by dimension. */
const naming: Record<TableDimension, DataColumn[]> = {
	season: ["season", "release"],
	measure: ["measure"],
	crop: ["crop"],
	area: ["area_code", "area_name"],
};
const beside: Record<ShownPart, DataColumn[]> = { error: ["standard_error"], interval: ["lower", "upper"], status: [] };

/**
 * The table as it is laid out on the page, by codes. Each figure stands with its status, since an empty field has to say
 * why; a place without a cell has neither.
 */
export function laidOutCsv(
	catalogue: TableCatalogue,
	selection: TableSelection,
	records: readonly DataRecord[],
): string {
	const laid = layOut(catalogue, selection, records);
	const names = laid.rowDimensions.flatMap((one) => naming[one]);
	const figures: DataColumn[] = ["value", ...selection.show.flatMap((one) => beside[one]), "status"];
	const header = [
		...names,
		...laid.columns.flatMap(({ at }) => figures.map((figure) => [...codesOf(at), figure].join("/"))),
	];
	const rows = laid.rows.map(({ cells }) => {
		const any = cells.find((cell) => cell !== null)!;
		return [
			...names.map((name) => any[name]),
			...cells.flatMap((cell) => figures.map((figure) => (cell ? cell[figure] : null))),
		];
	});
	return toCsv(header, rows);
}

const codesOf = (at: Address) => Object.values(at);
