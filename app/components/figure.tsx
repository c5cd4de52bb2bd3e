import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { classes } from "./classes.ts";

export type FigureProps = {
	/** Null where the survey did not ask. */
	status: "shown" | "withheld" | "no_growers" | null;
	value?: number | null;
	lower?: number | null;
	upper?: number | null;
	/** Of a day of the year: when a quarter and three quarters were there. */
	quartiles?: { first: number; third: number } | null;
	measure: FigureShape;
	steadiness?: "steady" | "care" | "rough" | null;
	size?: "cell" | "headline";
};

/** A published figure with its uncertainty, or the words for why there is none. */
export function Figure(props: FigureProps) {
	const { t } = useTranslation();
	const format = useFormat();
	const { status, value, lower, upper, quartiles, measure, steadiness, size = "cell" } = props;
	if (status !== "shown" || value === null || value === undefined) return <NoFigure {...props} />;
	const headline = size === "headline";
	const bounds =
		typeof lower === "number" && typeof upper === "number"
			? headline
				? t("figure.likely", format.ends(lower, upper, measure))
				: format.range(lower, upper, measure)
			: "";
	const numeral = measure.unit === "day" ? "text-day" : "text-numeral";
	const quiet = classes("block text-quiet", headline ? "mt-1 text-base" : "text-xs");
	return (
		<span className={headline ? "block" : undefined}>
			<strong className={headline ? classes("block tracking-tight", numeral) : "font-bold"}>
				{format.figure(value, measure)}
			</strong>
			{bounds && (
				<span
					className={classes(
						"text-quiet",
						headline ? "mt-2 block text-lg" : "ml-2 text-xs sm:whitespace-nowrap print:whitespace-normal",
					)}
				>
					{bounds}
				</span>
			)}
			{quartiles && (
				<span className={quiet}>
					{t("figure.half", { days: format.range(quartiles.first, quartiles.third, measure) })}
				</span>
			)}
			{steadiness && (headline || steadiness !== "steady") && (
				<span
					className={classes(
						"block",
						steadiness === "steady" ? "text-quiet" : "text-attention",
						headline ? "mt-1 text-base" : "text-xs",
					)}
				>
					{t(`steadiness.${steadiness}`)}
				</span>
			)}
		</span>
	);
}

function NoFigure({ status, steadiness, size }: FigureProps) {
	const { t } = useTranslation();
	const rough = status === "shown" && steadiness === "rough";
	const words = rough
		? t("steadiness.rough")
		: t(`figure.${status === "shown" ? "not_asked" : (status ?? "not_asked")}`);
	return (
		<span className={classes("inline-flex items-center gap-2 text-quiet", size === "headline" && "text-xl")}>
			{status === "withheld" && (
				<span aria-hidden="true" className="hatched inline-block size-4 shrink-0 border border-hatch" />
			)}
			{words}
		</span>
	);
}
