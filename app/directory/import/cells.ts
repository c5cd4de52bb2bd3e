/** A cell as it was read: its text, or what makes it unreadable with the text that a person would see there. */
export type Cell = string | { odd: "formula" | "merged"; text: string };
/** `number` is the line or row in the file, as a spreadsheet counts it. */
export type Row = { number: number; cells: Cell[] };
export type Sheet = { header: string[]; rows: Row[] };
/** Why a file is not read at all: each has words at `growers:import.refused.<code>`. */
export type FileRefused =
	"file_too_large" | "file_not_known" | "file_broken" | "file_empty" | "too_many_rows" | "too_many_columns";

export const mostFileBytes = 8 * 1024 * 1024;
export const mostRows = 20_000;
export const mostColumns = 300;
const mostText = 500;

export const textOf = (cell: Cell | undefined): string => (typeof cell === "string" ? cell : (cell?.text ?? ""));

/** A text of a file in which nothing is a formula by itself. One that begins like one is odd, unless an apostrophe leads it. */
export function cellOfText(text: string): Cell {
	const trimmed = text
		.replace(/[\s\u00a0]+/g, " ")
		.trim()
		.slice(0, mostText);
	if (/^'[=+\-@]/.test(trimmed)) return trimmed.slice(1);
	if (/^[=@]|^[+-].*[a-z]\w*\(/i.test(trimmed)) return { odd: "formula", text: trimmed };
	return trimmed;
}
