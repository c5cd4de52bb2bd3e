import { groupBy } from "#app/lib/group-by.ts";
import type { DataRecord } from "../data-file.ts";
import { chosenAreas, type TableCatalogue } from "./catalogue.ts";
import { type TableDimension, tableDimensions, type TableSelection } from "./selection.ts";

/** Codes by dimension; a season is its release's number, since one season can have several releases. */
export type Address = Partial<Record<TableDimension, string>>;
export type TableRow = { key: string; at: Address; cells: (DataRecord | null)[] };
export type LaidOut = {
	/** What names a row, in order. */
	rowDimensions: TableDimension[];
	/** What each column is of: one column of nothing else than the figure in a long table. */
	columns: { key: string; at: Address }[];
	rows: TableRow[];
};

export const addressOf = (record: DataRecord): Record<TableDimension, string> => ({
	season: `${record.release}`,
	measure: record.measure,
	crop: record.crop,
	area: record.area_code,
});

/**
 * Puts released cells into rows and columns, and does nothing else to them: none is added up, none left out. A row or a
 * column without any cell is not there; a place without a cell is null.
 */
export function layOut(catalogue: TableCatalogue, selection: TableSelection, records: readonly DataRecord[]): LaidOut {
	const across = selection.layout === "wide" ? tableDimensions.filter((one) => selection.columns.includes(one)) : [];
	const down = tableDimensions.filter((one) => !across.includes(one));
	const inOrder = sorter(catalogue, selection);
	const columns = inOrder(records, across).map(([key, [record]]) => ({ key, at: part(record!, across) }));
	const placeOf = new Map(columns.map(({ key }, index) => [key, index]));
	const rows = inOrder(records, down).map(([key, of]) => {
		const cells: (DataRecord | null)[] = columns.map(() => null);
		for (const record of of) cells[placeOf.get(keyOf(record, across))!] = record;
		return { key, at: part(of[0]!, down), cells };
	});
	return { rowDimensions: down, columns, rows };
}

const keyOf = (record: DataRecord, dimensions: TableDimension[]) => {
	const at = addressOf(record);
	return dimensions.map((one) => at[one]).join("|");
};
const part = (record: DataRecord, dimensions: TableDimension[]): Address => {
	const at = addressOf(record);
	return Object.fromEntries(dimensions.map((one) => [one, at[one]]));
};

/** Groups by some dimensions: seasons from the earliest, measures and crops in their own order, areas from wide to narrow. */
function sorter(catalogue: TableCatalogue, selection: TableSelection) {
	const seasons = catalogue.releases.toReversed().map(({ number }) => `${number}`);
	const areas = chosenAreas(catalogue, selection).map(({ key }) => key);
	const orders: Record<TableDimension, string[]> = {
		season: seasons,
		measure: selection.measure,
		crop: selection.crop,
		area: areas,
	};
	const ranks = Object.fromEntries(
		tableDimensions.map((one) => [one, new Map(orders[one].map((code, index) => [code, index]))]),
	);
	return (records: readonly DataRecord[], dimensions: TableDimension[]) => {
		const placesOf = (record: DataRecord) => {
			const at = addressOf(record);
			return dimensions.map((one) => ranks[one]!.get(at[one]) ?? 0);
		};
		return [...groupBy(records, (record) => keyOf(record, dimensions))]
			.map((group) => ({ group, places: placesOf(group[1][0]!) }))
			.toSorted((a, b) => firstDifference(a.places, b.places))
			.map(({ group }) => group);
	};
}

function firstDifference(a: number[], b: number[]): number {
	const at = a.findIndex((place, index) => place !== b[index]);
	return at < 0 ? 0 : a[at]! - b[at]!;
}
