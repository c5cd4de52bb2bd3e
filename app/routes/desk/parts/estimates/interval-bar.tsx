import type { BarScale } from "./estimate-rows.ts";

type IntervalBarProps = { value: number; lower: number; upper: number; scale: BarScale; words: string };

const [width, height] = [112, 14];

/** An interval drawn on the line that its column shares, the value marked. `words` tell the same. */
export function IntervalBar({ value, lower, upper, scale, words }: IntervalBarProps) {
	const span = scale.highest - scale.lowest || 1;
	const at = (number: number) => {
		const share = (number - scale.lowest) / span;
		return 2 + Math.min(1, Math.max(0, share)) * (width - 4);
	};
	return (
		<svg
			role="img"
			aria-label={words}
			width={width}
			height={height}
			viewBox={`0 0 ${width} ${height}`}
			className="inline-block align-middle"
		>
			<line x1={2} x2={width - 2} y1={height / 2} y2={height / 2} className="stroke-rule" strokeWidth={1} />
			{scale.lowest <= 0 && (
				<line x1={at(0)} x2={at(0)} y1={2} y2={height - 2} className="stroke-field" strokeWidth={1} />
			)}
			<line
				x1={at(lower)}
				x2={Math.max(at(upper), at(lower) + 1)}
				y1={height / 2}
				y2={height / 2}
				className="stroke-damson"
				strokeWidth={4}
			/>
			<line x1={at(value)} x2={at(value)} y1={1} y2={height - 1} className="stroke-ink" strokeWidth={2} />
		</svg>
	);
}
