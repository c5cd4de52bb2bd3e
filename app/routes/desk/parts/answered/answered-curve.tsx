import { useTranslation } from "react-i18next";
import type { Weighing } from "#app/collect/answered.schema.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { daysToTell, type SharePoint } from "#app/estimate/answered-over-time.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Curve } from "./response-rates.server.ts";

const size = { width: 720, height: 240, left: 52, right: 12, top: 12, bottom: 34 };
const mostRows = 12;

/** How the share grew from day to day, beside the season before; the table says the same for whoever reads it so. */
export function AnsweredCurve({ curve, weigh }: { curve: Curve; weigh: Weighing }) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const { now, before } = curve;
	const lastDay = Math.max(1, now.points.length - 1, (before?.points.length ?? 0) - 1);
	const percent = (point: SharePoint | undefined) =>
		point ? format.quantity(point.share * 100, "percent", 1) : t("rates.absent");
	const seasons = [now, ...(before ? [before] : [])];
	return (
		<>
			<figure>
				{/* Scrolled by keyboard only while in focus. */}
				{/* oxlint-disable-next-line jsx-a11y/no-noninteractive-tabindex */}
				<section tabIndex={0} aria-label={t("rates.overTime")} className="overflow-x-auto">
					<Lines seasons={seasons} lastDay={lastDay} label={t(`rates.curveOf.${weigh}`)} />
				</section>
				<figcaption className="mt-1 text-sm text-quiet">
					{t("rates.curveNow", { season: String(now.season) })}{" "}
					{before && t("rates.curveBefore", { season: String(before.season) })}
				</figcaption>
			</figure>
			<div className="mt-4 max-w-2xl">
				<DataTable
					caption={t(`rates.curveOf.${weigh}`)}
					rows={daysOf(lastDay, now.points.length - 1)}
					rowKey={String}
					columns={[
						{
							key: "day",
							header: t("rates.afterDays"),
							cell: (day) => format.quantity(day + 1, "days"),
						},
						...seasons.map(({ season, points }) => ({
							key: String(season),
							header: t("rates.season", { season: String(season) }),
							numeric: true,
							cell: (day: number) => percent(points[day]),
						})),
					]}
				/>
			</div>
		</>
	);
}

/** Days of both seasons, and today: where this one stands now is what is looked for. */
function daysOf(lastDay: number, today: number): number[] {
	return [...new Set([...daysToTell(lastDay, mostRows), Math.max(0, today)])].toSorted((a, b) => a - b);
}

type LinesProps = { seasons: Curve["now"][]; lastDay: number; label: string };

/** The first season is drawn whole, the second broken, so that grey print tells them apart. */
function Lines({ seasons, lastDay, label }: LinesProps) {
	const format = useFormat();
	const top = topOf(seasons.flatMap(({ points }) => points));
	const x = (day: number) => size.left + (day / lastDay) * (size.width - size.left - size.right);
	const y = (share: number) => size.height - size.bottom - (share / top) * (size.height - size.top - size.bottom);
	return (
		<svg
			role="img"
			aria-label={label}
			viewBox={`0 0 ${size.width} ${size.height}`}
			className="h-auto w-full min-w-[34rem] max-w-3xl text-quiet"
			fontSize="13"
			fill="currentColor"
		>
			{[0, 0.5, 1].map((part) => (
				<g key={part}>
					<line
						x1={size.left}
						x2={size.width - size.right}
						y1={y(part * top)}
						y2={y(part * top)}
						stroke="var(--color-rule)"
					/>
					<text x={size.left - 8} y={y(part * top) + 4} textAnchor="end">
						{format.quantity(part * top * 100, "percent", top < 0.1 ? 1 : 0)}
					</text>
				</g>
			))}
			{daysToTell(lastDay, 5).map((day) => (
				<text key={day} x={x(day)} y={size.height - 10} textAnchor={day === lastDay ? "end" : "middle"}>
					{format.quantity(day + 1, "days")}
				</text>
			))}
			{seasons.map(({ season, points }, index) => (
				<polyline
					key={season}
					points={points.map(({ day, share }) => `${x(day).toFixed(1)},${y(share).toFixed(1)}`).join(" ")}
					fill="none"
					stroke={index === 0 ? "var(--color-damson)" : "var(--color-ink)"}
					strokeWidth={index === 0 ? 3 : 1.5}
					strokeDasharray={index === 0 ? undefined : "6 5"}
					strokeLinejoin="round"
				/>
			))}
		</svg>
	);
}

/** The next of a few round shares, so that a slow survey is no flat line. */
function topOf(points: SharePoint[]): number {
	const highest = Math.max(0, ...points.map(({ share }) => share));
	return [0.05, 0.1, 0.2, 0.4, 0.6, 0.8].find((top) => top >= highest) ?? 1;
}
