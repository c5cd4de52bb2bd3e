import { useFormat } from "#app/i18n/use-format.ts";
import { classes } from "#app/components/classes.ts";
import { rangeOf } from "#app/lib/likely-range.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { markFill } from "./chart-fills.ts";
import { ends, lookOf, useTickText } from "./chart-look.ts";
import { chartWidth } from "./row-chart.tsx";
import { placeOn, scaleOf } from "./scale.ts";

type SeasonLineProps = { drawn: Extract<ResolvedChart, { chart: "seasons" }>; alternative: string };

const [top, bottom, left, right] = [28, 150, 72, chartWidth - 40];

/** One figure season by season, each with its likely range; a season without a number is left open. */
export function SeasonLine({ drawn: { measure, rows }, alternative }: SeasonLineProps) {
	const format = useFormat();
	const tickText = useTickText();
	const told = rows.filter(({ cell }) => lookOf(cell) === "number");
	const days = measure.unit === "day";
	const held = told.flatMap(({ cell }) => ends(cell));
	const scale = scaleOf(held.concat(days ? [] : [0]), { zero: !days, days, wanted: 3 });
	const y = placeOn(scale, bottom, top);
	const [first, last] = [rows[0]?.season ?? 0, rows.at(-1)?.season ?? 0];
	const x = (season: number) =>
		first === last ? (left + right) / 2 : left + ((season - first) / (last - first)) * (right - left);
	const path = told.map(({ season, cell }, index) => `${index ? "L" : "M"}${x(season)} ${y(cell.value ?? 0)}`).join("");
	return (
		<svg
			viewBox={`0 0 ${chartWidth} ${bottom + 24}`}
			role="img"
			aria-label={alternative}
			className="chart block h-auto w-full max-w-lg"
		>
			{scale.ticks.map((tick) => (
				<g key={tick}>
					<line x1={0} x2={chartWidth} y1={y(tick)} y2={y(tick)} className="chart-grid" />
					<text x={0} y={y(tick) - 3} className="chart-tick">
						{tickText(tick, measure, scale.ticks)}
					</text>
				</g>
			))}
			<path d={path} className="chart-line" />
			{told.map(({ season, cell }) => {
				const [lower, upper] = ends(cell).map(y) as [number, number];
				return (
					<g key={season}>
						{rangeOf(cell) && (
							<path
								d={`M${x(season) - 4} ${upper}h8M${x(season)} ${upper}V${lower}M${x(season) - 4} ${lower}h8`}
								className="chart-whisker"
							/>
						)}
						<circle
							{...{ cx: x(season), cy: y(cell.value ?? 0), r: 6 }}
							className={classes("chart-edge", markFill[measure.hue], cell.steadiness === "care" && "chart-care")}
						/>
						<text x={x(season)} y={upper - 8} textAnchor="middle" className="chart-text font-bold">
							{days || measure.unit === "percent"
								? format.figure(cell.value ?? 0, { ...measure, season })
								: format.number(cell.value ?? 0, measure.decimals)}
						</text>
					</g>
				);
			})}
			{rows.map(({ season }) => (
				<text key={season} x={x(season)} y={bottom + 18} textAnchor="middle" className="chart-quiet">
					{season}
				</text>
			))}
		</svg>
	);
}
