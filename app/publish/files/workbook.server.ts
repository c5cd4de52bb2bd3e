import { PassThrough } from "node:stream";
import { buffer } from "node:stream/consumers";
import type ExcelJS from "exceljs";
import { columnType, type DataColumn, dataColumns } from "../data-file.ts";
import { codebookRows } from "./codebook.ts";
import type { FileSource } from "./release-file.ts";

/**
 * The cells as a workbook for spreadsheets, with the codebook in both languages on sheets of its own. Texts are written as
 * texts, so that none runs as a formula and no code loses its zeros; a date is a real date.
 */
export async function cellsWorkbook(source: FileSource): Promise<Uint8Array> {
	// Read when the first workbook is made: it takes as long as a third of all else that starts a program.
	const { default: exceljs } = await import("exceljs");
	const sink = new PassThrough();
	const taken = buffer(sink);
	const book = new exceljs.stream.xlsx.WorkbookWriter({ stream: sink, useStyles: true });
	// The same source gives the same file, as far as the format lets it.
	book.created = new Date(source.publishedAt);
	book.modified = book.created;
	addCells(book, source);
	addCodebook(book, source, "en");
	addCodebook(book, source, "es");
	await book.commit();
	return taken;
}

type Book = InstanceType<typeof ExcelJS.stream.xlsx.WorkbookWriter>;

function addCells(book: Book, { records }: FileSource): void {
	const sheet = book.addWorksheet("cells", { views: [{ state: "frozen", ySplit: 1 }] });
	sheet.columns = dataColumns.map((key) => ({ header: key, key, width: widthOf(key), style: styleOf(key) }));
	for (const record of records) {
		sheet.addRow(dataColumns.map((key) => (columnType(key) === "date" ? dateOf(record[key]) : record[key]))).commit();
	}
	sheet.commit();
}

function addCodebook(book: Book, source: FileSource, language: "en" | "es"): void {
	const sheet = book.addWorksheet(language === "en" ? "codebook" : "códigos");
	const [header, ...rows] = codebookRows(source, language);
	sheet.addRow([source.codebookTitle[language]]).commit();
	sheet.addRow([source.address]).commit();
	sheet.addRow([]).commit();
	for (const row of [header!, ...rows]) sheet.addRow(row).commit();
	sheet.commit();
}

const widthOf = (column: DataColumn) => (column === "area_name" || column === "measure" ? 28 : 14);
const formats = { text: "@", integer: "0", number: "General", date: "yyyy-mm-dd" } as const;
const styleOf = (column: DataColumn) => ({ numFmt: formats[columnType(column)] });
const dateOf = (date: string | number | null) => (date === null ? null : new Date(`${date}T00:00:00Z`));
