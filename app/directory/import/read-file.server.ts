import { parse } from "csv-parse/sync";
import type ExcelJS from "exceljs";
import {
	type Cell,
	cellOfText,
	type FileRefused,
	mostColumns,
	mostRows,
	type Row,
	type Sheet,
	textOf,
} from "./cells.ts";
import { guessColumns } from "./columns.ts";
import { measureZip } from "./zip-size.server.ts";

const mostInflated = 80 * 1024 * 1024;
/** A heading may stand above the row of column names. */
const headerSearch = 10;

/** Reads a list out of a file, whatever its name says it is: a spreadsheet by its first bytes, else text. */
export async function readSheet(file: Buffer): Promise<Sheet | FileRefused> {
	const rows = file.subarray(0, 4).equals(Buffer.from([0x50, 0x4b, 3, 4])) ? await readBook(file) : readText(file);
	if (typeof rows === "string") return rows;
	const filled = rows.filter(({ cells }) => cells.some((cell) => textOf(cell) !== ""));
	const header = filled[headerIndex(filled)];
	const body = filled.slice(headerIndex(filled) + 1);
	if (!header || body.length === 0) return "file_empty";
	if (body.length > mostRows) return "too_many_rows";
	const width = Math.max(...filled.map(({ cells }) => cells.length));
	if (width > mostColumns) return "too_many_columns";
	return { header: Array.from({ length: width }, (_, i) => textOf(header.cells[i])), rows: body };
}

/** The row of column names: the one among the first that names most of what is known here, else the first. */
function headerIndex(rows: Row[]): number {
	const known = rows.slice(0, headerSearch).map(({ cells }) => Object.keys(guessColumns(cells.map(textOf))).length);
	const most = Math.max(0, ...known);
	return most >= 2 ? known.indexOf(most) : 0;
}

function readText(file: Buffer): Row[] | FileRefused {
	if (file.length === 0) return "file_empty";
	const text = decode(file);
	// A picture or an older spreadsheet has signs that no list has; a document under a list's name says what it is.
	if (text.includes("\0") || text.startsWith("%PDF-")) return "file_not_known";
	try {
		const records = parse(text, {
			delimiter: delimiterOf(text),
			info: true,
			relax_column_count: true,
			relax_quotes: true,
			skip_empty_lines: true,
			to: mostRows + headerSearch + 2,
			max_record_size: 1_000_000,
		}) as unknown as { record: string[]; info: { lines: number } }[];
		return records.map(({ record, info }) => ({ number: info.lines, cells: record.map(cellOfText) }));
	} catch {
		return "file_broken";
	}
}

/** UTF-8 where it is that, also UTF-16 with its mark; everything else is read as Windows-1252, which holds Latin-1. */
function decode(file: Buffer): string {
	if (file[0] === 0xff && file[1] === 0xfe) return new TextDecoder("utf-16le").decode(file);
	try {
		return new TextDecoder("utf-8", { fatal: true }).decode(file);
	} catch {
		return new TextDecoder("windows-1252").decode(file);
	}
}

function delimiterOf(text: string): string {
	const start = text
		.split(/\r?\n/, headerSearch)
		.join("\n")
		.replace(/"[^"]*"/g, "");
	const counted = [",", ";", "\t"].map((sign) => ({ sign, count: start.split(sign).length }));
	return counted.toSorted((a, b) => b.count - a.count)[0]!.sign;
}

async function readBook(file: Buffer): Promise<Row[] | FileRefused> {
	const size = measureZip(file, mostInflated);
	if (size !== "within") return `file_${size}`;
	// Read when the first workbook comes, as where workbooks are made.
	const { default: exceljs } = await import("exceljs");
	const book = new exceljs.Workbook();
	try {
		await book.xlsx.load(file as unknown as ArrayBuffer);
	} catch {
		return "file_broken";
	}
	const sheet = book.worksheets.find(({ actualRowCount }) => actualRowCount > 0);
	if (!sheet) return "file_empty";
	if (sheet.actualRowCount > mostRows + headerSearch + 1) return "too_many_rows";
	if (sheet.columnCount > mostColumns) return "too_many_columns";
	const rows: Row[] = [];
	sheet.eachRow((row, number) => {
		const cells = Array.from({ length: row.cellCount }, (_, i) => cellOfBook(row.getCell(i + 1)));
		rows.push({ number, cells });
	});
	return rows;
}

function cellOfBook(cell: ExcelJS.Cell): Cell {
	const value = cell.isMerged ? cell.master.value : cell.value;
	if (cell.formula || (typeof value === "object" && value !== null && "formula" in value))
		return { odd: "formula", text: `=${cell.formula}` };
	const text = writtenOf(value)
		.replace(/[\s\u00a0]+/g, " ")
		.trim()
		.slice(0, 500);
	if (cell.isMerged) return { odd: "merged", text };
	// In a spreadsheet a text stays one, however it begins.
	return text;
}

function writtenOf(value: ExcelJS.CellValue): string {
	if (value === null || value === undefined) return "";
	if (value instanceof Date) return value.toISOString().slice(0, 10);
	if (typeof value !== "object") return String(value);
	if ("richText" in value) return value.richText.map(({ text }) => text).join("");
	if ("text" in value) return writtenOf(value.text as ExcelJS.CellValue);
	return "error" in value ? String(value.error) : "";
}
