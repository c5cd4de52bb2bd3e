import type { Area } from "#app/directory/areas.server.ts";
import type { AreaEstimate } from "#app/estimate/survey.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { EstimatesQuery } from "./estimates.schema.ts";

export type Figure = Omit<AreaEstimate, "joins">;
export type EstimateRow = {
	area: Pick<Area, "key" | "kind" | "name" | "stateFips"> & { parentName: string; depth: number };
	/** Most operations whose answer any of the row's figures could use. */
	respondents: number;
	figures: Figure[];
};
/** Ends of the line that a measure's intervals are drawn on. */
export type BarScale = { lowest: number; highest: number };
export type MeasureOfTable = { key: string; unit: string };

const depths = { region: 0, state: 1, district: 2, county: 3 };

/** The rows of the area tree that the choice leaves, in the tree's order. Areas without any answer are not among them. */
export function chooseRows(
	areas: readonly Area[],
	estimates: readonly AreaEstimate[],
	{ level, state, steadiness }: Pick<EstimatesQuery, "level" | "state" | "steadiness">,
): EstimateRow[] {
	const nameOf = new Map(areas.map((area) => [area.key, area.name]));
	const ofArea = groupBy(estimates, (estimate) => estimate.areaKey);
	return areas
		.filter((area) => level === "all" || area.kind === level)
		.filter((area) => state === "all" || area.stateFips === state)
		.flatMap(({ key, kind, name, stateFips, parentKey }) => {
			const figures = (ofArea.get(key) ?? []).map(({ joins: _joins, ...figure }) => figure);
			const wanted = figures.some(
				(one) => steadiness === "all" || (one.respondents > 0 && one.steadiness === steadiness),
			);
			if (!wanted) return [];
			const parentName = nameOf.get(parentKey ?? "") ?? "";
			const respondents = Math.max(...figures.map((figure) => figure.respondents));
			return [{ area: { key, kind, name, stateFips, parentName, depth: depths[kind] }, respondents, figures }];
		});
}

/** Sorted by a column; what has no value comes last either way, and what is equal stays in the order of the tree. */
export function sortRows(
	rows: readonly EstimateRow[],
	{ sort, direction, measure }: Pick<EstimatesQuery, "sort" | "direction" | "measure">,
): EstimateRow[] {
	const sign = direction === "desc" ? -1 : 1;
	if (sort === "area") return direction === "desc" ? rows.toReversed() : [...rows];
	return rows.toSorted((a, b) => {
		const [left, right] = [sortValue(a, sort, measure), sortValue(b, sort, measure)];
		if (left === null || right === null) return Number(left === null) - Number(right === null);
		return sign * (left - right);
	});
}

const steadinessRank = { steady: 0, care: 1, rough: 2 };

function sortValue(row: EstimateRow, sort: string, measure: string): number | null {
	if (sort === "respondents") return row.respondents;
	const figure = row.figures.find((one) => one.measureKey === (measure === "all" ? sort : measure));
	if (!figure) return null;
	if (sort === "standardError" || sort === "cv") return figure[sort];
	return sort === "steadiness" ? steadinessRank[figure.steadiness] : figure.value;
}

/**
 * What each measure's intervals are drawn on: percent from 0 to 100; days from the first to the last of the rows; others from 0 to the largest end of the rows of one
 * area level, since a county's total would be a speck beside its state's.
 */
export function barScales(
	rows: readonly EstimateRow[],
	measures: readonly MeasureOfTable[],
): Record<string, Record<string, BarScale>> {
	const levels = groupBy(rows, (row) => row.area.kind);
	const scalesOf = ({ key, unit }: MeasureOfTable) =>
		[...levels].map(([kind, ofLevel]): [string, BarScale] => {
			const figures = ofLevel.flatMap((row) => row.figures.filter((figure) => figure.measureKey === key));
			if (unit === "day") return [kind, daysScale(figures)];
			const ends = figures.flatMap(({ value, lower, upper }) => [value ?? 0, lower ?? 0, upper ?? 0]);
			const percent = unit === "percent";
			const lowest = percent ? Math.max(-100, Math.min(0, ...ends)) : Math.min(0, ...ends);
			return [kind, { lowest, highest: percent ? 100 : Math.max(0, ...ends) || 1 }];
		});
	return Object.fromEntries(measures.map((measure) => [measure.key, Object.fromEntries(scalesOf(measure))]));
}

/** A day has no zero to be drawn from. */
export function daysScale(figures: readonly Pick<Figure, "value" | "lower" | "upper" | "quartiles">[]): BarScale {
	const days = figures
		.flatMap(({ value, lower, upper, quartiles }) => [value, lower, upper, quartiles?.first, quartiles?.third])
		.filter((day) => typeof day === "number");
	return days.length === 0 ? { lowest: 1, highest: 366 } : { lowest: Math.min(...days), highest: Math.max(...days) };
}
