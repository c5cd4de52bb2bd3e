import type { Cell } from "#app/publish/cell.ts";
import type { SeasonCell } from "#app/publish/report-source.server.ts";

export type Unshown = { season: number; why: "withheld" | "no_growers" | "no_figure" | "rough" | "not_released" };

/** The seasons from the first to the last of a chart that have no number, each with what the releases say of it. */
export function unshownSeasons(rows: SeasonCell[]): Unshown[] {
	const cellOf = new Map(rows.map(({ season, cell }) => [season, cell]));
	const [first, last] = [Math.min(...cellOf.keys()), Math.max(...cellOf.keys())];
	const unshown: Unshown[] = [];
	for (let season = first; season <= last; season++) {
		const cell = cellOf.get(season);
		const why = cell ? whyNone(cell) : "not_released";
		if (why) unshown.push({ season, why });
	}
	return unshown;
}

function whyNone({ status, steadiness, value }: Cell): Unshown["why"] | null {
	if (status !== "shown") return status;
	if (steadiness === null) return "no_figure";
	return value === null || steadiness === "rough" ? "rough" : null;
}
