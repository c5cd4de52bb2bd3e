import { type ColumnSource, parquetWriteBuffer, type SchemaElement } from "hyparquet-writer";
import { type ColumnType, columnType, dataColumns, filledColumns } from "../data-file.ts";
import type { FileSource } from "./release-file.ts";

/** Text is UTF-8 and a date is a date in the file itself, so that no reader has to guess. */
const types: Record<ColumnType, Pick<SchemaElement, "type" | "converted_type">> = {
	text: { type: "BYTE_ARRAY", converted_type: "UTF8" },
	integer: { type: "INT32" },
	number: { type: "DOUBLE" },
	date: { type: "INT32", converted_type: "DATE" },
};

/** The cells as Apache Parquet: the rows of cells.csv in their order, what is empty there is null here. */
export function cellsParquet({ records, parts, address, terms, license }: FileSource): Uint8Array {
	const columnData: ColumnSource[] = dataColumns.map((name) => ({
		name,
		data: records.map((record) => (columnType(name) === "date" ? dateOf(record[name]) : record[name])),
	}));
	const schema: SchemaElement[] = [
		{ name: "cells", num_children: dataColumns.length },
		...dataColumns.map((name): SchemaElement => ({
			name,
			...types[columnType(name)],
			repetition_type: filledColumns.includes(name) ? "REQUIRED" : "OPTIONAL",
		})),
	];
	const kvMetadata = [
		{ key: "release", value: parts.map(({ release }) => release.number).join(",") },
		{ key: "address", value: address },
		{ key: "terms_of_use", value: terms.en },
		...(license ? [{ key: "license", value: license }] : []),
	];
	return new Uint8Array(parquetWriteBuffer({ columnData, schema, kvMetadata }));
}

const dateOf = (date: string | number | null) => (date === null ? null : new Date(`${date}T00:00:00Z`));
