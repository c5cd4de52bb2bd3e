import type { Area } from "#app/directory/areas.server.ts";
import type { AreaEstimate } from "#app/estimate/survey.ts";
import type { DraftCell, DraftFigure } from "#app/release/draft.ts";

type Told = Pick<DraftFigure, "value" | "standardError" | "lower" | "upper" | "quartiles">;
export type ComparedRow = {
	area: Pick<Area, "key" | "kind" | "name" | "stateFips">;
	measureKey: string;
	/** As drafted. */
	drafted: Told;
	/** From the tallies as they stand; null where no answer is left. */
	current: Told | null;
	respondentsNow: number;
	/** Current less drafted, in the value's units; null where either has no value. */
	difference: number | null;
	changed: boolean;
};

/**
 * The figures that a draft would show beside those that today's tallies give. What the draft withholds has no figure in it
 * and is not compared.
 * @param cells the draft's, of one crop. @param estimates of that crop.
 */
export function compareFigures(
	areas: readonly Area[],
	measureKeys: readonly string[],
	cells: readonly DraftCell[],
	estimates: readonly AreaEstimate[],
): ComparedRow[] {
	const cellOf = new Map(cells.map((cell) => [cell.areaKey, cell]));
	const nowOf = new Map(estimates.map((estimate) => [`${estimate.areaKey} ${estimate.measureKey}`, estimate]));
	return areas.flatMap(({ key, kind, name, stateFips }) =>
		measureKeys.flatMap((measureKey): ComparedRow[] => {
			const drafted = cellOf.get(key)?.figures?.find((figure) => figure.measureKey === measureKey);
			if (!drafted) return [];
			const now = nowOf.get(`${key} ${measureKey}`);
			const area = { key, kind, name, stateFips };
			const current = now ? toldOf(now) : null;
			const [before, after] = [drafted.value, current?.value ?? null];
			const difference = before === null || after === null ? null : after - before;
			const respondentsNow = now?.respondents ?? 0;
			return [
				{
					area,
					measureKey,
					drafted: toldOf(drafted),
					current,
					respondentsNow,
					difference,
					changed: differs(drafted, current),
				},
			];
		}),
	);
}

function toldOf({ value, standardError, lower, upper, quartiles }: Told): Told {
	return { value, standardError, lower, upper, ...(quartiles && { quartiles }) };
}

/** What differs by rounding alone has not changed: sums can be added in another order. */
function differs(drafted: Told, current: Told | null): boolean {
	const numbersOf = (told: Told | null) =>
		[told?.value, told?.standardError, told?.quartiles?.first, told?.quartiles?.third].map((number) => number ?? null);
	const now = numbersOf(current);
	return numbersOf(drafted).some((before, at) => {
		const after = now[at] ?? null;
		if (before === null || after === null) return before !== after;
		return Math.abs(after - before) > 1e-9 * Math.max(1, Math.abs(before));
	});
}
