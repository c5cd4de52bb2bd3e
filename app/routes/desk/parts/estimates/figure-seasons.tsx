import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { FigureSeasons } from "./figure-seasons.server.ts";

type FigureSeasonsProps = {
	seasons: FigureSeasons;
	measure: FigureShape;
	place: { areaKey: string; cropKey: string; measureKey: string };
};

/** The figure in earlier seasons, the change since the last one, and how far it is from what is usual. */
export function FigureSeasonsPart({ seasons: { earlier, change, usual }, measure, place }: FigureSeasonsProps) {
	const { t } = useTranslation("release");
	const format = useFormat();
	// A digit finer than the figure, as its standard error is.
	const distance = (value: number) => format.distance(value, { ...measure, decimals: measure.decimals + 1 });
	const [more, less] = measure.unit === "day" ? (["later", "earlier"] as const) : (["more", "less"] as const);
	/** A difference in words, with half of its interval. */
	const apart = (value: number, { lower, upper }: { lower: number; upper: number }) => ({
		direction: t(`seasons.${value >= 0 ? more : less}`, { amount: distance(value) }),
		error: distance((upper - lower) / 2),
	});
	return (
		<Section title={t("seasons.title")}>
			{earlier.length === 0 ? (
				<p>{t("seasons.none")}</p>
			) : (
				<>
					{change && (
						<p className="mb-3 max-w-prose">
							{change.difference !== null && change.interval
								? t("seasons.change", {
										since: String(change.since),
										...apart(change.difference, change.interval),
										both: format.number(change.respondents.both),
									})
								: t("seasons.noChange", { since: String(change.since) })}
						</p>
					)}
					{usual && (
						<p className="mb-3 max-w-prose">
							{t("seasons.usual", {
								count: usual.mean.seasons,
								seasons: format.number(usual.mean.seasons),
								mean: format.figure(usual.mean.value, measure),
								...apart(usual.difference.value, usual.interval),
							})}
						</p>
					)}
					<DataTable
						caption={t("seasons.title")}
						captionHidden
						rows={earlier}
						rowKey={(row) => row.surveyId}
						columns={[
							{
								key: "season",
								header: t("seasons.season"),
								cell: (row) => (
									<Link
										to={href("/desk/surveys/:surveyId/estimates/:areaKey/:cropKey/:measureKey", {
											surveyId: row.surveyId,
											...place,
										})}
									>
										{String(row.season)}
									</Link>
								),
							},
							{
								key: "value",
								header: t("origin.value"),
								numeric: true,
								cell: (row) => (row.figure ? format.figure(row.figure.value, measure) : t("estimates.absent")),
							},
							{
								key: "se",
								header: t("estimates.se"),
								numeric: true,
								cell: (row) => (row.figure ? format.spread(row.figure.standardError, measure) : t("estimates.absent")),
							},
						]}
					/>
					<p className="mt-3 max-w-prose text-sm text-quiet">{t("seasons.note")}</p>
				</>
			)}
		</Section>
	);
}
