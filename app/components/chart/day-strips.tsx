import { useTranslation } from "react-i18next";
import { classes } from "#app/components/classes.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { markFill, paleFill } from "./chart-fills.ts";
import { numbered, type Shown } from "./chart-look.ts";
import { bandHeight, type ChartRow, RowChart, Whisker } from "./row-chart.tsx";
import { scaleOf } from "./scale.ts";

type DayStripsProps = { drawn: Extract<ResolvedChart, { chart: "windows" }>; alternative: string };

const daysOf = (cells: Shown[]) => cells.flatMap((cell) => cell.value ?? []);

/** From the first day to the last, a mark for each day between; thin ends say when a quarter had begun and ended. */
export function DayStrips({ drawn: { measures, rows }, alternative }: DayStripsProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const told = rows.map(({ cropKey, cells }) => ({ cropKey, cells: numbered(cells.flatMap((cell) => cell ?? [])) }));
	const measure = measures[0];
	const quartiles = rows.flatMap(({ cells }) =>
		cells.flatMap((cell) => (cell?.quartiles ? [cell.quartiles.first, cell.quartiles.third] : [])),
	);
	if (!measure) return null;
	const scale = scaleOf([...told.flatMap(({ cells }) => daysOf(cells)), ...quartiles], { days: true, wanted: 2 });
	return (
		<RowChart
			rows={told.map(({ cropKey, cells }, index): ChartRow => {
				const days = daysOf(cells);
				const whole = days.length > 1;
				const first = rows[index]?.cells[0];
				return {
					key: cropKey,
					label: t(`common:crop.${cropKey}`),
					value: whole
						? format.range(Math.min(...days), Math.max(...days), measure)
						: t(first?.status === "withheld" ? "report:chart.withheld" : "report:chart.rough"),
					look: whole ? "number" : first?.status === "withheld" ? "withheld" : "rough",
				};
			})}
			scale={scale}
			tickText={(tick) => format.figure(tick, measure)}
			alternative={alternative}
			mark={(index, top, x) => {
				const cells = told[index]?.cells ?? [];
				const days = daysOf(cells);
				const [first, last] = [Math.min(...days), Math.max(...days)];
				const y = top + bandHeight / 2;
				return (
					<>
						<Whisker
							from={x(cells[0]?.quartiles?.first ?? first)}
							to={x(cells.at(-1)?.quartiles?.third ?? last)}
							y={y}
						/>
						<rect
							{...{ x: x(first), y: top + 2, width: Math.max(1, x(last) - x(first)), height: bandHeight - 4 }}
							className={classes("chart-edge", paleFill[measure.hue])}
						/>
						{days.map((day) => (
							<circle key={day} cx={x(day)} cy={y} r={5} className={classes("chart-edge", markFill[measure.hue])} />
						))}
					</>
				);
			}}
		/>
	);
}
