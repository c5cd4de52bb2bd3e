import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { BarScale, Figure } from "./estimate-rows.ts";
import { IntervalBar } from "./interval-bar.tsx";

export type TableMeasure = FigureShape & { key: string; label: { en: string; es: string } };
type FigureProps = { figure: Figure; measure: FigureShape };

/** The interval, drawn and in words; where there is none, why. */
export function FigureInterval({ figure, measure, scale }: FigureProps & { scale: BarScale }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const { value, standardError, lower, upper, missing } = figure;
	if (value === null || lower === null || upper === null) {
		const why = missing ?? (standardError === 0 ? "agreeing" : "no_spread");
		return <span className="text-xs text-quiet">{t(`estimates.noInterval.${why}`)}</span>;
	}
	const words = t("estimates.likely", format.ends(lower, upper, measure));
	return (
		<span className="inline-flex flex-col items-end">
			<IntervalBar {...{ value, lower, upper, scale }} words={words} />
			<span aria-hidden="true" className="whitespace-nowrap text-xs text-quiet">
				{format.range(lower, upper, measure)}
			</span>
		</span>
	);
}

/** How far a figure can be leant on, in words. */
export function FigureSteadiness({ figure }: { figure: Figure }) {
	const { t } = useTranslation();
	return (
		<span className={figure.steadiness === "steady" ? "text-quiet" : "text-attention"}>
			{t(`steadiness.${figure.steadiness}`)}
		</span>
	);
}

/** A standard error or a coefficient of variation, or a dash with its words where there is none. */
export function useSpread() {
	const { t } = useTranslation("release");
	const format = useFormat();
	return {
		standardError: ({ standardError }: Figure, measure: FigureShape) =>
			standardError === null ? t("estimates.absent") : format.spread(standardError, measure),
		cv: ({ cv }: Figure) => (cv === null ? t("estimates.absent") : format.quantity(cv * 100, "percent", 1)),
	};
}

/** All that is known of one figure in one cell of the table. */
export function FigureCell({ figure, measure, scale, to }: FigureProps & { scale: BarScale; to: React.ReactNode }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const spread = useSpread();
	if (figure.respondents === 0) return <span className="text-quiet">{t("estimates.none")}</span>;
	return (
		<span className="inline-flex min-w-36 flex-col items-end gap-0.5">
			{to}
			<FigureInterval figure={figure} measure={measure} scale={scale} />
			{figure.quartiles && (
				<span className="text-xs text-quiet">
					{t("common:figure.half", { days: format.range(figure.quartiles.first, figure.quartiles.third, measure) })}
				</span>
			)}
			<span className="text-xs text-quiet">
				{figure.standardError !== null &&
					`${t("estimates.seShort", { value: spread.standardError(figure, measure) })} · `}
				{t("estimates.nShort", { count: figure.respondents, value: format.number(figure.respondents) })}
			</span>
			<span className="text-xs">
				<FigureSteadiness figure={figure} />
			</span>
		</span>
	);
}
