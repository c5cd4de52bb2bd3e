import { type AreaKind, areaKinds } from "../cell.ts";
import type { DataRecord } from "../data-file.ts";
import { apiAddresses } from "./api-addresses.ts";
import type { TableCatalogue } from "./catalogue.ts";
import { notesOf } from "./comparability.ts";
import { type Address, addressOf, layOut, type LaidOut } from "./layout.ts";
import { tableLimits } from "./limits.ts";
import {
	canBeTold,
	type ReadSelection,
	searchOf,
	type SelectionProblem,
	tableDimensions,
	type TableSelection,
} from "./selection.ts";
import { chartsOf, mapOf, type NoChart, type TableChart, type TableMap } from "./views.ts";

/** One page of a table, with the chart and the map of the whole. */
export type ToldTable = Omit<LaidOut, "rows"> & {
	rows: LaidOut["rows"];
	rowCount: number;
	cellCount: number;
	/** What is the same in every cell. */
	same: Address;
	/** Levels of the areas in it. */
	kinds: AreaKind[];
	page: number;
	pageCount: number;
	charts: TableChart[] | NoChart;
	map: TableMap | null;
};

/** Everything that the page tells of a choice; the cells are null where they are not to be had or nothing can be told. */
export function tellChoice(catalogue: TableCatalogue, read: ReadSelection, records: readonly DataRecord[] | null) {
	const { selection } = read;
	const told = records ? tellTable(catalogue, selection, records) : { table: null, problems: [] };
	return {
		selection,
		problems: [...read.problems, ...told.problems],
		table: told.table,
		notes: selection.release.length > 0 ? notesOf(catalogue, selection) : [],
		search: searchOf(selection),
		/** Where the same cells are had by programs. */
		addresses: canBeTold(read) ? apiAddresses(catalogue, selection) : [],
	};
}
export type ToldChoice = ReturnType<typeof tellChoice>;

/** What a page shows of the released cells of a choice, the same on the server and in the browser. */
function tellTable(
	catalogue: TableCatalogue,
	selection: TableSelection,
	records: readonly DataRecord[],
): { table: ToldTable | null; problems: SelectionProblem[] } {
	const laid = layOut(catalogue, selection, records);
	if (laid.columns.length > tableLimits.columns) {
		const detail = { columns: laid.columns.length, max: tableLimits.columns };
		return { table: null, problems: [{ field: "columns", code: "columns_limit", detail }] };
	}
	const pageCount = Math.max(1, Math.ceil(laid.rows.length / tableLimits.rows));
	const page = Math.min(selection.page, pageCount);
	return {
		table: {
			...laid,
			rows: laid.rows.slice((page - 1) * tableLimits.rows, page * tableLimits.rows),
			rowCount: laid.rows.length,
			cellCount: records.length,
			same: sameOf(records),
			kinds: areaKinds.filter((kind) => records.some((record) => record.area_kind === kind)),
			page,
			pageCount,
			charts: chartsOf(catalogue, records),
			map: mapOf(catalogue, records),
		},
		problems: [],
	};
}

function sameOf(records: readonly DataRecord[]): Address {
	const [first] = records.map(addressOf);
	if (!first) return {};
	const same = tableDimensions.filter((one) => records.every((record) => addressOf(record)[one] === first[one]));
	return Object.fromEntries(same.map((one) => [one, first[one]]));
}
