import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { rangeOf } from "#app/lib/likely-range.ts";
import type { Cell } from "#app/publish/cell.ts";

/** One figure as a chart draws it. */
export type Shown = Pick<Cell, "status" | "value" | "lower" | "upper" | "steadiness">;
export type Look = "number" | "withheld" | "rough";

export const lookOf = ({ status, value, steadiness }: Shown): Look =>
	status === "withheld" ? "withheld" : value === null || steadiness === "rough" ? "rough" : "number";
export const numbered = <C extends Shown>(cells: C[]) => cells.filter((cell) => lookOf(cell) === "number");
/** What a scale must hold of a figure. */
export const ends = (cell: Shown): [number, number] => rangeOf(cell) ?? [cell.value ?? 0, cell.value ?? 0];
export const careClass = (cell: Shown) => cell.steadiness === "care" && "chart-care";
const decimalsOf = (ticks: number[]) => Math.max(0, ...ticks.map((tick) => `${tick}`.split(".")[1]?.length ?? 0));

/** A row's figure in words, or why there is none. */
export function useValueText() {
	const { t } = useTranslation();
	const format = useFormat();
	return (cell: Shown, measure: FigureShape): string => {
		if (lookOf(cell) === "withheld") return t("report:chart.withheld");
		return lookOf(cell) === "rough" ? t("report:chart.rough") : format.figure(cell.value ?? 0, measure);
	};
}

/** A value on an axis: days and percents with their sign or month, all others as plain numbers, whose unit is in the table. */
export function useTickText() {
	const format = useFormat();
	return (tick: number, measure: FigureShape, ticks: number[]): string => {
		if (measure.unit === "day") return format.figure(tick, measure);
		const decimals = decimalsOf(ticks);
		return measure.unit === "percent" ? format.figure(tick, { ...measure, decimals }) : format.number(tick, decimals);
	};
}
