import { lookOf, lookOrder, type MapCell } from "./cell.ts";
import type { Release, ReleaseMeasure } from "./release.ts";

/** One area in two seasons. The cell is null where that season's release does not have the area. */
export type SeasonRow = Pick<MapCell, "areaKey" | "areaName" | "kind" | "stateFips"> & {
	earlier: MapCell | null;
	later: MapCell | null;
	/** Later less earlier, in the measure's unit, as a reader would reckon it from the two figures shown. */
	change: number | null;
};

/** Every area of either season by key; a change only where both figures are shown as numbers. */
export function pairRows(earlier: MapCell[], later: MapCell[], decimals: number): SeasonRow[] {
	const before = new Map(earlier.map((cell) => [cell.areaKey, cell]));
	const now = new Map(later.map((cell) => [cell.areaKey, cell]));
	return [...new Map([...before, ...now]).values()].map(({ areaKey, areaName, kind, stateFips }) => {
		const [one, two] = [before.get(areaKey) ?? null, now.get(areaKey) ?? null];
		return { areaKey, areaName, kind, stateFips, earlier: one, later: two, change: changeOf(one, two, decimals) };
	});
}

function changeOf(earlier: MapCell | null, later: MapCell | null, decimals: number): number | null {
	const [before, now] = [shownValue(earlier), shownValue(later)];
	if (before === null || now === null) return null;
	const rounded = (value: number) => Number(value.toFixed(decimals));
	return rounded(rounded(now) - rounded(before));
}

const shownValue = (cell: MapCell | null) => (cell && lookOf(cell) === "number" ? cell.value : null);

export type SeasonOrder = { key: "area" | "value" | "earlier" | "change"; direction: "asc" | "desc" };

/** The rows in the order asked for. What has no number comes last, by kind of sign and then by name, whichever way. */
export function orderSeasonRows(
	rows: SeasonRow[],
	{ key, direction }: SeasonOrder,
	compare: (a: string, b: string) => number,
): SeasonRow[] {
	const byName = (a: SeasonRow, b: SeasonRow) => compare(a.areaName, b.areaName) || compare(a.areaKey, b.areaKey);
	const turn = direction === "desc" ? -1 : 1;
	if (key === "area") return rows.toSorted((a, b) => turn * byName(a, b));
	const cellOf = (row: SeasonRow) => (key === "earlier" ? row.earlier : row.later);
	const numberOf = (row: SeasonRow) => (key === "change" ? row.change : shownValue(cellOf(row)));
	const signOf = (row: SeasonRow) => {
		const cell = cellOf(row);
		return key === "change" ? 0 : lookOrder.indexOf(cell ? lookOf(cell) : "no_figure");
	};
	return rows.toSorted((a, b) => {
		const [one, two] = [numberOf(a), numberOf(b)];
		if (one === null || two === null)
			return Number(one === null) - Number(two === null) || signOf(a) - signOf(b) || byName(a, b);
		return turn * (one - two) || byName(a, b);
	});
}

export const seasonDifferences = ["form", "wording", "rules", "counties", "districts"] as const;
export type SeasonDifference = (typeof seasonDifferences)[number];
export type Compared = {
	release: Pick<Release, "formKey" | "rules">;
	measure: Pick<ReleaseMeasure, "kind" | "label" | "description">;
	areaOfCounty: Record<string, string | null>;
};

/** What was not the same in both seasons, so that a change can be of the making and not of the crop. */
export function differencesOf(earlier: Compared, later: Compared): SeasonDifference[] {
	const same = (read: (of: Compared) => unknown) => sameText(read(earlier), read(later));
	const shared = Object.keys(earlier.areaOfCounty).filter((fips) => fips in later.areaOfCounty);
	const differs: Record<SeasonDifference, boolean> = {
		form: !same(({ release }) => release.formKey),
		wording: !same(({ measure: { kind, label, description } }) => [kind, label, description]),
		rules: !same(({ release }) => Object.entries(release.rules).toSorted()),
		counties: !same(({ areaOfCounty }) => Object.keys(areaOfCounty).toSorted()),
		// On a map of counties each is its own area, and nothing differs here.
		districts: shared.some((fips) => earlier.areaOfCounty[fips] !== later.areaOfCounty[fips]),
	};
	return seasonDifferences.filter((key) => differs[key]);
}

const sameText = (a: unknown, b: unknown) => JSON.stringify(a) === JSON.stringify(b);
