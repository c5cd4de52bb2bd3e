import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import type { MeasureCalibration } from "#app/estimate/calibration/weighed-survey.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Words } from "#app/lib/words.ts";

type CalibrationTableProps = {
	calibrations: MeasureCalibration[];
	measures: { key: string; label: Words }[];
};

/** How a crop's calibrated weights came about, state by state: how far they moved, or why design weights were kept. */
export function CalibrationTable({ calibrations, measures }: CalibrationTableProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	const labelOf = new Map(measures.map(({ key, label }) => [key, wordsIn(label, i18n.language)]));
	return (
		<DataTable
			caption={t("weighting.how.caption")}
			rows={calibrations}
			rowKey={(row) => `${row.stateFips.join("+")} ${row.measureKeys.join(" ")}`}
			columns={[
				{
					key: "state",
					header: t("estimates.state"),
					cell: (row) => format.list(row.stateFips.map((state) => t(`common:state.${state}`))),
				},
				{
					key: "measures",
					header: t("weighting.how.measures"),
					cell: (row) => format.list(row.measureKeys.map((key) => labelOf.get(key) ?? key)),
				},
				{
					key: "respondents",
					header: t("estimates.answers"),
					numeric: true,
					cell: (row) => format.number(row.respondents),
				},
				{
					key: "outcome",
					header: t("weighting.how.outcome"),
					cell: (row) => t(row.fallback ? `weighting.fallback.${row.fallback}` : "weighting.how.met"),
				},
				{
					key: "factors",
					header: t("weighting.how.factors"),
					numeric: true,
					cell: (row) =>
						row.fallback
							? t("estimates.absent")
							: t("weighting.how.range", {
									smallest: format.number(row.smallest, 2),
									largest: format.number(row.largest, 2),
								}),
				},
				{
					key: "sweeps",
					header: t("weighting.how.sweeps"),
					numeric: true,
					cell: (row) => (row.sweeps ? format.number(row.sweeps) : t("estimates.absent")),
				},
			]}
		/>
	);
}
