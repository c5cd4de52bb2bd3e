import { mostRows, mostValues } from "../api/limits.ts";

/** How large a table can be, so that no request holds up the others; each limit is said in words where it is met. */
export const tableLimits = {
	/** As many as one page of the data API holds, which the preview asks for. */
	cells: mostRows,
	/** As many codes as the data API takes in one list. */
	codes: mostValues,
	releases: 12,
	columns: 24,
	/** Rows of one page of the preview. */
	rows: 50,
	/** Areas listed by a search. */
	found: 30,
	/** Lines of a chart. */
	drawn: 40,
} as const;
