import { type DraftCell, publishedFigure, type ReleaseAudit, type ReleaseMethod, respondentsBand } from "./draft.ts";

/** The rows that a release is made of, column by column: a band for a count, figures rounded, nothing of a cell that is hidden. */
export function publishedRows({ measures }: Pick<ReleaseMethod, "measures">, cells: readonly DraftCell[]) {
	const decimalsOf = new Map(measures.map((measure) => [measure.key, measure.decimals]));
	const cellRows = cells.map((cell) => ({
		crop_key: cell.cropKey,
		area_key: cell.areaKey,
		status: cell.status,
		respondents_band: cell.respondents === null ? null : respondentsBand(cell.respondents),
	}));
	const figureRows = cells.flatMap((cell) =>
		(cell.figures ?? []).map((drafted) => {
			const figure = publishedFigure(drafted, decimalsOf.get(drafted.measureKey) ?? 0);
			return {
				measure_key: figure.measureKey,
				crop_key: cell.cropKey,
				area_key: cell.areaKey,
				value: figure.value,
				standard_error: figure.standardError,
				cv: figure.cv,
				lower_bound: figure.lower,
				upper_bound: figure.upper,
				steadiness: figure.steadiness,
				first_quartile: figure.quartiles?.first ?? null,
				third_quartile: figure.quartiles?.third ?? null,
			};
		}),
	);
	return { cellRows, figureRows };
}

/**
 * How a release was made, as far as it is told. How many answered stands only where the cell of all crops does: else a count
 * below the least would say why that cell is withheld. Joined strata are left out, since each had fewer than two answers; of
 * calibrated weights only how far they went in all, since which state kept its own would tell where few answered.
 */
export function publishedMethod(
	{ measures: _m, areas: _a, joins: _j, calibrations, ...method }: ReleaseMethod,
	cells: readonly DraftCell[],
) {
	const shown = new Set(
		cells.flatMap(({ cropKey, areaKey, status }) => (cropKey === "all" && status === "shown" ? [areaKey] : [])),
	);
	return {
		...method,
		...(calibrations.length > 0 && { calibration: calibrationInAll(calibrations) }),
		all: shown.has("network") ? method.all : undefined,
		states: method.states.filter(({ stateFips }) => shown.has(stateFips)),
	};
}

function calibrationInAll(calibrations: ReleaseMethod["calibrations"]) {
	return {
		parts: calibrations.length,
		designKept: calibrations.filter(({ fallback }) => fallback !== null).length,
		mostSweeps: Math.max(...calibrations.map(({ sweeps }) => sweeps ?? 0)),
		smallest: Math.min(...calibrations.map(({ smallest }) => smallest)),
		largest: Math.max(...calibrations.map(({ largest }) => largest)),
	};
}

/** The audit without what names cells, and without how many are withheld for which reason, which is for the desk alone. */
export function publishedAudit({
	failures: _f,
	withheldForOwnSake: _w,
	shields: _s,
	knownElsewhere: _k,
	heldAgainst: _h,
	...audit
}: ReleaseAudit) {
	return audit;
}
