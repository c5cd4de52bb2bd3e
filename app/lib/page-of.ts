/** One page of a list that was made whole. */
export type PageOf<Row> = { rows: Row[]; total: number; page: number; pageCount: number };

/** The wanted page, or the last where there are fewer. */
export function pageOf<Row>(rows: readonly Row[], page: number, size = 50): PageOf<Row> {
	const pageCount = Math.max(1, Math.ceil(rows.length / size));
	const shown = Math.min(page, pageCount);
	return { rows: rows.slice((shown - 1) * size, shown * size), total: rows.length, page: shown, pageCount };
}
