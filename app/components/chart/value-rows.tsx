import { useTranslation } from "react-i18next";
import { classes } from "#app/components/classes.ts";
import { useAreaName } from "#app/components/map/area-name.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { markFill } from "./chart-fills.ts";
import { careClass, ends, lookOf, numbered, type Shown, useTickText, useValueText } from "./chart-look.ts";
import { bandHeight, RowChart, Whisker } from "./row-chart.tsx";
import { rangeOf } from "#app/lib/likely-range.ts";
import { scaleOf } from "./scale.ts";

type Drawn<K extends "crops" | "areas"> = {
	drawn: Extract<ResolvedChart, { chart: K }>;
	alternative: string;
	/** Values of charts beside this one, which stands on the same scale. */
	beside?: number[];
};

/** Crops as bars from zero, each with its likely range; days, which have no zero, as dots. */
export function CropBars({ drawn: { measure, rows }, ...said }: Drawn<"crops">) {
	const { t } = useTranslation();
	const named = rows.map((cell) => ({ key: cell.cropKey, label: t(`common:crop.${cell.cropKey}`), cell }));
	return <ValueRows rows={named} measure={measure} bars={measure.unit !== "day"} {...said} />;
}

/** Areas as dots with their likely range. */
export function AreaDots({ drawn: { measure, rows }, ...said }: Drawn<"areas">) {
	const areaName = useAreaName();
	const named = rows.map((cell) => ({ key: cell.areaKey, label: areaName(cell), cell }));
	return <ValueRows rows={named} measure={measure} bars={false} {...said} />;
}

type ValueRowsProps = {
	rows: { key: string; label: string; cell: Shown }[];
	measure: Drawn<"crops">["drawn"]["measure"];
	bars: boolean;
	alternative: string;
	beside?: number[];
};

/** So many rows without a number stand for themselves; more of one kind are one row, and the table names them all. */
const mostBlank = 2;

function useJoined(rows: ValueRowsProps["rows"]): ValueRowsProps["rows"] {
	const { t } = useTranslation("report");
	const of = (look: string) => rows.filter(({ cell }) => lookOf(cell) === look);
	const joined = (["withheld", "rough"] as const).flatMap((look) => {
		const [first, ...rest] = of(look);
		if (!first || rest.length < mostBlank) return of(look);
		return [{ ...first, key: look, label: t("chart.several", { count: rest.length + 1 }) }];
	});
	return [...of("number"), ...joined];
}

function ValueRows({ rows: all, measure, bars, alternative, beside }: ValueRowsProps) {
	const rows = useJoined(all);
	const valueText = useValueText();
	const tickText = useTickText();
	const days = measure.unit === "day";
	const values = [...numbered(rows.map(({ cell }) => cell)).flatMap(ends), ...(beside ?? [])];
	const scale = scaleOf(days && values.length > 0 ? values : [...values, 0], {
		zero: !days,
		days,
		wanted: days ? 2 : 4,
	});
	return (
		<RowChart
			rows={rows.map(({ key, label, cell }) => ({
				key,
				label,
				value: valueText(cell, measure),
				look: lookOf(cell),
			}))}
			scale={scale}
			tickText={(tick) => tickText(tick, measure, scale.ticks)}
			alternative={alternative}
			mark={(index, top, x) => {
				const { cell } = rows[index]!;
				const value = x(cell.value ?? 0);
				const range = rangeOf(cell);
				const y = top + bandHeight / 2;
				const look = classes("chart-edge", markFill[measure.hue], careClass(cell));
				const bar = { x: x(0), y: top, width: Math.max(0.5, value - x(0)), height: bandHeight };
				return (
					<>
						{bars && <rect {...bar} className={look} />}
						{range && <Whisker from={x(range[0])} to={x(range[1])} y={y} />}
						{!bars && <circle cx={value} cy={y} r={6} className={look} />}
					</>
				);
			}}
		/>
	);
}
