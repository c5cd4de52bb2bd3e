import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { Hue } from "#app/components/map/map-data.ts";
import { classes } from "#app/components/classes.ts";
import { markFill } from "./chart-fills.ts";
import { careClass, ends, type Shown, useTickText } from "./chart-look.ts";
import { bandHeight, RowChart, Whisker } from "./row-chart.tsx";
import { rangeOf } from "#app/lib/likely-range.ts";
import { scaleOf } from "./scale.ts";

type BesideChartProps = {
	own: { label: string; value: number };
	area: { label: string; cell: Shown };
	measure: FigureShape & { hue: Hue };
	/** What it shows, in a sentence. */
	alternative: string;
};

/** One own value over that of an area with its likely range, on one scale: bars from zero, or days as dots. */
export function BesideChart({ own, area, measure, alternative }: BesideChartProps) {
	const format = useFormat();
	const tickText = useTickText();
	const days = measure.unit === "day";
	const range = rangeOf(area.cell);
	const values = [own.value, area.cell.value ?? 0, ...ends(area.cell)];
	const scale = scaleOf(days ? values : [...values, 0], { zero: !days, days, wanted: days ? 2 : 4 });
	const rows = [
		{ key: "own", label: own.label, shown: own.value, fill: "fill-damson" },
		{
			key: "area",
			label: area.label,
			shown: area.cell.value ?? 0,
			fill: classes(markFill[measure.hue], careClass(area.cell)),
		},
	];
	return (
		<RowChart
			rows={rows.map(({ key, label, shown }) => ({ key, label, value: format.figure(shown, measure), look: "number" }))}
			scale={scale}
			tickText={(tick) => tickText(tick, measure, scale.ticks)}
			alternative={alternative}
			mark={(index, top, x) => {
				const { key, shown, fill } = rows[index]!;
				const y = top + bandHeight / 2;
				const look = classes("chart-edge", fill);
				return (
					<>
						{!days && (
							<rect x={x(0)} y={top} width={Math.max(0.5, x(shown) - x(0))} height={bandHeight} className={look} />
						)}
						{key === "area" && range && <Whisker from={x(range[0])} to={x(range[1])} y={y} />}
						{days && <circle cx={x(shown)} cy={y} r={6} className={look} />}
					</>
				);
			}}
		/>
	);
}
