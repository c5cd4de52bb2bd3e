import type { Area } from "#app/directory/areas.server.ts";
import type { AreaEstimate } from "#app/estimate/survey.ts";

type Told = Pick<AreaEstimate, "value" | "standardError" | "lower" | "upper">;
export type ReweightedRow = {
	area: Pick<Area, "key" | "kind" | "name" | "stateFips">;
	measureKey: string;
	respondents: number;
	design: Told;
	calibrated: Told;
	/** Calibrated less design, in the value's units. */
	difference: number | null;
	/** Calibrated over design standard error, less 1; null where either is missing or 0. */
	errorChange: number | null;
};

/** Each figure by design weights and by others, in the order of the areas. Figures that nobody answered are left out. */
export function compareWeights(
	areas: readonly Area[],
	measureKeys: readonly string[],
	design: readonly AreaEstimate[],
	calibrated: readonly AreaEstimate[],
): ReweightedRow[] {
	const [first, second] = [placed(design), placed(calibrated)];
	return areas.flatMap(({ key, kind, name, stateFips }) =>
		measureKeys.flatMap((measureKey): ReweightedRow[] => {
			const [one, other] = [first.get(`${key} ${measureKey}`), second.get(`${key} ${measureKey}`)];
			if (!one || !other || one.respondents === 0) return [];
			return [
				{
					area: { key, kind, name, stateFips },
					measureKey,
					respondents: one.respondents,
					design: toldOf(one),
					calibrated: toldOf(other),
					difference: one.value === null || other.value === null ? null : other.value - one.value,
					errorChange: one.standardError && other.standardError ? other.standardError / one.standardError - 1 : null,
				},
			];
		}),
	);
}

function placed(estimates: readonly AreaEstimate[]): Map<string, AreaEstimate> {
	return new Map(estimates.map((estimate) => [`${estimate.areaKey} ${estimate.measureKey}`, estimate]));
}

function toldOf({ value, standardError, lower, upper }: AreaEstimate): Told {
	return { value, standardError, lower, upper };
}

type Sorting = { sort: "area" | "difference" | "errorChange"; direction: "asc" | "desc" };

/** By a column with its sign; what has none comes last either way. */
export function sortReweighted(rows: ReweightedRow[], { sort, direction }: Sorting): ReweightedRow[] {
	if (sort === "area") return direction === "desc" ? rows.toReversed() : rows;
	const sign = direction === "desc" ? -1 : 1;
	return rows.toSorted((a, b) => {
		const [left, right] = [a[sort], b[sort]];
		if (left === null || right === null) return Number(left === null) - Number(right === null);
		return sign * (left - right);
	});
}
