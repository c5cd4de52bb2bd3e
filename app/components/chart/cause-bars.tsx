import { useTranslation } from "react-i18next";
import { classes } from "#app/components/classes.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { paleFill, partFill } from "./chart-fills.ts";
import { ends, lookOf, numbered, useTickText, useValueText } from "./chart-look.ts";
import { bandHeight, RowChart, Whisker } from "./row-chart.tsx";
import { rangeOf } from "#app/lib/likely-range.ts";
import { scaleOf } from "./scale.ts";

type CauseBarsProps = { drawn: Extract<ResolvedChart, { chart: "causes" }>; alternative: string };

/** The whole loss as a pale bar with its likely range, and in it what single causes took. */
export function CauseBars({ drawn: { measure, parts, rows }, alternative }: CauseBarsProps) {
	const { t } = useTranslation();
	const valueText = useValueText();
	const tickText = useTickText();
	const wholes = rows.map(({ whole }) => whole);
	const scale = scaleOf(numbered(wholes).flatMap(ends).concat([0]), { zero: true });
	return (
		<RowChart
			rows={rows.map(({ cropKey, whole }) => ({
				key: cropKey,
				label: t(`common:crop.${cropKey}`),
				value: valueText(whole, measure),
				look: lookOf(whole),
			}))}
			scale={scale}
			tickText={(tick) => tickText(tick, measure, scale.ticks)}
			alternative={alternative}
			mark={(index, top, x) => {
				const row = rows[index]!;
				const range = rangeOf(row.whole);
				const shares = parts.map((_, place) => {
					const cell = row.parts[place];
					return cell && lookOf(cell) === "number" ? (cell.value ?? 0) : 0;
				});
				const before = (place: number) => shares.slice(0, place).reduce((sum, share) => sum + share, 0);
				return (
					<>
						<rect
							{...{ x: x(0), y: top, width: Math.max(0.5, x(row.whole.value ?? 0) - x(0)), height: bandHeight }}
							className={classes("chart-edge", paleFill[measure.hue])}
						/>
						{shares.map((share, place) => (
							<rect
								// oxlint-disable-next-line react/no-array-index-key -- the parts of a bar are the measures in their order
								key={place}
								{...{ x: x(before(place)), y: top, width: Math.max(0, x(share) - x(0)), height: bandHeight }}
								className={classes("chart-edge", partFill(measure.hue, place))}
							/>
						))}
						{range && <Whisker from={x(range[0])} to={x(range[1])} y={top + bandHeight / 2} />}
					</>
				);
			}}
		/>
	);
}
