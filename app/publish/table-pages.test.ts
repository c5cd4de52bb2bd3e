import { expect, test } from "vitest";
import { formatterFor } from "#app/lib/format.ts";
import { pageOf } from "#app/lib/page-of.ts";
import { lookOf, type MapCell } from "./cell.ts";
import { orderSeasonRows, pairRows } from "./season-pair.ts";
import { tableRows } from "./table-rows.ts";

const { compare } = formatterFor("es", ((key: string) => key) as never);
const size = 500;

/** Counties of which many share a name, and many a value, as all of the country's do. */
function cellsOf(season: number): MapCell[] {
	return Array.from({ length: 1234 }, (_, index) => {
		const number = (index + season) % 3 > 0;
		const status = number ? "shown" : (["withheld", "no_growers", "shown"] as const)[(index % 7) % 3]!;
		const cell = {
			areaKey: `${10_000 + index}`,
			areaName: `Condado ${index % 97}`,
			kind: "county" as const,
			stateFips: "19",
			status,
			value: number ? (index * season) % 12 : null,
			lower: null,
			upper: null,
			quartiles: null,
			steadiness: number ? ("steady" as const) : status === "shown" ? ("rough" as const) : null,
			respondentsBand: null,
		};
		return { ...cell, look: lookOf(cell), classIndex: null };
	});
}

/** The database gives rows in the order it likes, another one for each page that is asked for. */
const shuffled = <Row>(rows: Row[], page: number): Row[] =>
	rows.toSorted((a, b) => ((rows.indexOf(a) * 7919 * page) % 1009) - ((rows.indexOf(b) * 7919 * page) % 1009));

function allPages<Row extends { areaKey: string }>(rowsOf: (page: number) => Row[]): string[] {
	const { pageCount } = pageOf(rowsOf(1), 1, size);
	expect(pageCount).toBe(3);
	return Array.from({ length: pageCount }, (_, index) => pageOf(rowsOf(index + 1), index + 1, size))
		.flatMap(({ rows }) => rows)
		.map(({ areaKey }) => areaKey);
}

const orders = (["asc", "desc"] as const).flatMap((direction) =>
	(["area", "value", "earlier", "change"] as const).map((key) => [key, direction] as const),
);

test.each(orders)("the pages of a map's table hold every area once, by %s %s", (key, direction) => {
	const [earlier, later] = [cellsOf(2030), cellsOf(2031)];
	const all = later.map(({ areaKey }) => areaKey);
	const sort = key === "value" ? "value" : "area";
	const one = allPages((page) => tableRows(shuffled(later, page), { q: "", sort, direction }, compare));
	expect(one.toSorted()).toEqual(all);
	const rows = pairRows(earlier, later, 0);
	const two = allPages((page) => orderSeasonRows(shuffled(rows, page), { key, direction }, compare));
	expect(two.toSorted()).toEqual(all);
	expect(two).not.toEqual(all);
});
