import { useTranslation } from "react-i18next";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { MeasureUnit } from "#app/lib/format.ts";
import { FigureInterval, FigureSteadiness, useSpread } from "./estimate-figure.tsx";
import { type BarScale, daysScale, type Figure } from "./estimate-rows.ts";
import type { ToldFigure } from "./figure-origin.server.ts";

/** The figure itself with all that says how sure it is. */
export function FigureFacts({ told: { origin, measure } }: { told: ToldFigure }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const spread = useSpread();
	const { estimate } = origin;
	if (!estimate || estimate.respondents === 0) return <p className="font-bold">{t("origin.nobody")}</p>;
	const { value, quartiles } = estimate;
	const scale = scaleOf(estimate, measure.unit);
	return (
		<DescriptionList
			items={[
				{
					term: t("origin.value"),
					detail: <strong>{value === null ? t("estimates.noBase") : format.figure(value, measure)}</strong>,
				},
				{ term: t("estimates.interval"), detail: <FigureInterval figure={estimate} measure={measure} scale={scale} /> },
				...(quartiles
					? [
							{ term: t("origin.firstQuartile"), detail: format.figure(quartiles.first, measure) },
							{ term: t("origin.thirdQuartile"), detail: format.figure(quartiles.third, measure) },
						]
					: []),
				{ term: t("estimates.se"), detail: spread.standardError(estimate, measure) },
				...(measure.kind === "day" ? [] : [{ term: t("estimates.cv"), detail: spread.cv(estimate) }]),
				{ term: t("estimates.answers"), detail: format.number(estimate.respondents) },
				{ term: t("estimates.steadiness"), detail: <FigureSteadiness figure={estimate} /> },
			]}
		/>
	);
}

function scaleOf({ value, lower, upper, quartiles }: Figure, unit: string): BarScale {
	if (unit === "day") return daysScale([{ value, lower, upper, quartiles }]);
	const ends = [0, value ?? 0, lower ?? 0, upper ?? 0];
	const highest = unit === "percent" ? Math.max(100, ...ends) : Math.max(...ends) || 1;
	return { lowest: Math.min(...ends), highest };
}

const intervals = { ratio: "normal", mean: "normal", total: "normal", proportion: "logit", day: "inverted" } as const;

/** The formula in words, and the two sums that it is of. */
export function FigureFormula({ told: { origin, measure, units } }: { told: ToldFigure }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const { totals, calibrations } = origin;
	const isCalibrated = calibrations.length > 0;
	const quotient = measure.kind === "ratio" || measure.kind === "proportion";
	const isDay = measure.kind === "day";
	const inUnit = (sum: number, unit: MeasureUnit) => format.figure(sum, { ...measure, unit, decimals: 1 });
	return (
		<Section title={t("origin.formula.title")}>
			<ol className="mb-5 ml-5 max-w-prose list-decimal space-y-2">
				<li>{t("origin.formula.weight")}</li>
				{isCalibrated && <li>{t("origin.formula.calibrated")}</li>}
				<li>{t(`origin.formula.${measure.kind}`)}</li>
				<li>{t(`origin.formula.${isDay ? "shareVariance" : isCalibrated ? "calibratedVariance" : "variance"}`)}</li>
				<li>{t(`origin.formula.${intervals[measure.kind]}`)}</li>
			</ol>
			<DescriptionList
				items={[
					{ term: t("origin.weightedCount"), detail: inUnit(totals.count, "operations") },
					{ term: t(isDay ? "origin.weightedBefore" : "origin.weightedY"), detail: inUnit(totals.y, units.y) },
					...(quotient && units.x ? [{ term: t("origin.weightedX"), detail: inUnit(totals.x, units.x) }] : []),
				]}
			/>
		</Section>
	);
}
