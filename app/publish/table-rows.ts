import { type Cell, orderCells } from "./cell.ts";

/** The rows of a table of areas: those whose name holds the searched text, in the order asked for. */
export function tableRows<C extends Cell>(
	cells: C[],
	{ q, sort, direction }: { q: string; sort: "area" | "value"; direction: "asc" | "desc" },
	compare: (a: string, b: string) => number,
): C[] {
	return orderCells(namedLike(cells, q), { key: sort, direction }, compare);
}

/** Those whose area's name holds the searched text. */
export function namedLike<A extends { areaName: string }>(areas: A[], q: string): A[] {
	const wanted = plain(q);
	return areas.filter(({ areaName }) => plain(areaName).includes(wanted));
}

/** Without accents and capitals, so that a search on a plain keyboard finds "Peña". */
export function plain(text: string): string {
	return text.normalize("NFD").replace(/\p{M}/gu, "").toLowerCase();
}
