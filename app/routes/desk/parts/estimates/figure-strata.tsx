import { useTranslation } from "react-i18next";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { MeasureUnit } from "#app/lib/format.ts";
import type { OriginStratum } from "./figure-origin.ts";
import type { ToldFigure } from "./figure-origin.server.ts";

/** The weights by stratum, and which strata were joined and why. */
export function FigureStrata({ told: { origin, measure, units } }: { told: ToldFigure }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const named = useStratumName();
	const quotient = measure.kind === "ratio" || measure.kind === "proportion";
	const isDay = measure.kind === "day";
	const inUnit = (sum: number, unit: MeasureUnit) =>
		format.figure(sum, { ...measure, unit, decimals: unit === "operations" ? 0 : 1 });
	return (
		<Section title={t("origin.strata.title")}>
			<DataTable
				caption={t("origin.strata.caption")}
				rows={origin.strata}
				rowKey={(stratum) => stratum.stratumKeys.join("+")}
				columns={[
					{ key: "stratum", header: t("origin.strata.stratum"), cell: (stratum) => named(stratum.parts) },
					number("frame", t("origin.strata.frameSize"), (one) => format.number(one.frameSize)),
					number("respondents", t("origin.strata.respondents"), (one) => format.number(one.respondents)),
					number("weight", t("origin.strata.weight"), (one) => format.number(one.weight, 3)),
					...(origin.calibrations.length > 0
						? [
								number("calibrated", t("weighting.figure.range"), ({ calibrated }) =>
									calibrated
										? t("weighting.figure.rangeOf", {
												smallest: format.number(calibrated.smallest, 3),
												largest: format.number(calibrated.largest, 3),
											})
										: t("estimates.absent"),
								),
							]
						: []),
					number("inArea", t("origin.strata.inArea"), (one) => format.number(one.inArea)),
					number("sumY", t(isDay ? "origin.strata.before" : "origin.strata.sumY"), (one) => inUnit(one.sumY, units.y)),
					...(quotient && units.x
						? [number("sumX", t("origin.strata.sumX"), (one) => inUnit(one.sumX, units.x!))]
						: []),
					number("share", t("origin.strata.share"), ({ varianceShare }) =>
						varianceShare === null ? t("estimates.absent") : format.quantity(varianceShare * 100, "percent", 1),
					),
				]}
				empty={<p className="text-quiet">{t("origin.nobody")}</p>}
			/>
			{origin.strata.length > 0 && origin.otherStrata > 0 && (
				<p className="mt-3 max-w-prose text-sm text-quiet">
					{t("origin.strata.others", { count: origin.otherStrata, value: format.number(origin.otherStrata) })}
				</p>
			)}
			<h3 className="mt-6 text-lg">{t("origin.joins.title")}</h3>
			{origin.joins.length === 0 ? (
				<p>{t("origin.joins.none")}</p>
			) : (
				<ul className="ml-5 list-disc">
					{origin.joins.map(({ stratumKeys, parts, step }) => (
						<li key={stratumKeys.join("+")}>{t(`origin.joins.${step}`, { strata: named(parts) })}</li>
					))}
				</ul>
			)}
		</Section>
	);
}

function number(key: string, header: string, cell: (stratum: OriginStratum) => string): Column<OriginStratum> {
	return { key, header, numeric: true, cell };
}

const sizeNames = ["small", "medium", "large"] as const;

/** Strata by state and size, in words. */
export function useStratumName() {
	const { t } = useTranslation("release");
	const format = useFormat();
	return (parts: OriginStratum["parts"]) =>
		format.list(
			parts.map(({ stateFips, sizeClass }) =>
				t(`origin.strata.${sizeNames[sizeClass - 1] ?? "small"}`, { state: t(`common:state.${stateFips}`) }),
			),
		);
}
