import "./chart.css";
import { type ReactNode, useId } from "react";
import { MapPatterns } from "#app/components/map/patterns.tsx";
import { placeOn, type Scale } from "./scale.ts";

/** One line of a chart: its name, its figure in words, and whether it has a number to draw. */
export type ChartRow = { key: string; label: string; value: string; look: "number" | "withheld" | "rough" };
type RowChartProps = {
	rows: ChartRow[];
	scale: Scale;
	tickText: (tick: number) => string;
	/** What the chart shows, in a sentence; the figures themselves stand in the table below. */
	alternative: string;
	/** Draws a row's mark; `top` is where its band of 16 units begins. */
	mark: (index: number, top: number, x: (value: number) => number) => ReactNode;
};

export const chartWidth = 360;
const [left, right] = [8, chartWidth - 8];
const rowHeight = 44;
/** How many letters of name and figure stand beside each other; where one row has more, all figures get a line of their own. */
const lettersBeside = 46;
const lineHeight = 16;
const axisHeight = 20;
export const bandHeight = 16;

/**
 * Rows one below the other, name and figure above each mark, so that long names and a phone's width go together. Drawn on
 * the server, and small enough to be read without scaling.
 */
export function RowChart({ rows, scale, tickText, alternative, mark }: RowChartProps) {
	const id = useId();
	const x = placeOn(scale, left, right);
	const extra = rows.some(({ label, value }) => label.length + value.length > lettersBeside) ? lineHeight : 0;
	const bottom = rows.length * (rowHeight + extra);
	return (
		<svg
			viewBox={`0 0 ${chartWidth} ${bottom + axisHeight}`}
			role="img"
			aria-label={alternative}
			className="chart block h-auto w-full max-w-lg"
		>
			<MapPatterns id={id} />
			{scale.ticks.map((tick, index) => (
				<g key={tick}>
					<line x1={x(tick)} x2={x(tick)} y1={20} y2={bottom} className="chart-grid" />
					<text x={x(tick)} y={bottom + 14} textAnchor={anchorOf(index, scale.ticks.length)} className="chart-tick">
						{tickText(tick)}
					</text>
				</g>
			))}
			{rows.map((row, index) => {
				const top = index * (rowHeight + extra);
				return (
					<g key={row.key}>
						<text x={left} y={top + 16} className="chart-text">
							{row.label}
						</text>
						<text x={right} y={top + extra + 16} className="chart-value">
							{row.value}
						</text>
						{row.look === "number" ? (
							mark(index, top + extra + 22, x)
						) : (
							<rect
								{...{ x: left, y: top + extra + 22, width: 72, height: bandHeight }}
								fill={`url(#${id}-${row.look})`}
								className="chart-grid"
							/>
						)}
					</g>
				);
			})}
		</svg>
	);
}

/** Words at the two ends stay within the drawing. */
function anchorOf(index: number, count: number): "start" | "middle" | "end" {
	if (index === 0) return "start";
	return index === count - 1 ? "end" : "middle";
}

type WhiskerProps = { from: number; to: number; y: number };

/** The likely range, as a line with an end on each side. */
export function Whisker({ from, to, y }: WhiskerProps) {
	return <path d={`M${from} ${y - 4}V${y + 4}M${from} ${y}H${to}M${to} ${y - 4}V${y + 4}`} className="chart-whisker" />;
}
