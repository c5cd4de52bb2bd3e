import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { restOfState } from "#app/estimate/calibration/districts.ts";
import type { CalibrationNote, KnownTotal } from "#app/estimate/calibration/weighting.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ToldFigure } from "./figure-origin.server.ts";
import { useStratumName } from "./figure-strata.tsx";

/** What a figure's weights were fitted to, and how far they moved or why they stayed. Nothing by design weights. */
export function FigureCalibration({ told }: { told: ToldFigure }) {
	const { t } = useTranslation("release");
	const { calibrations } = told.origin;
	if (calibrations.length === 0) return null;
	return (
		<Section title={t("weighting.figure.title")}>
			<p className="mb-4 max-w-prose">
				<strong>{t(`weighting.choice.${told.weighting}.name`)}.</strong> {t(`weighting.choice.${told.weighting}.help`)}
			</p>
			{calibrations.map((note) => (
				<Calibration key={note.stateFips.join("+")} note={note} told={told} />
			))}
			<p className="mt-3 max-w-prose text-sm text-quiet">{t("weighting.figure.open")}</p>
		</Section>
	);
}

function Calibration({ note, told }: { note: CalibrationNote; told: ToldFigure }) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const nameTotal = useTotalName(told);
	const nameOf = new Map(told.districts.map(({ key, name }) => [key, name]));
	return (
		<>
			<h3 className="mt-6 text-lg">{format.list(note.stateFips.map((state) => t(`common:state.${state}`)))}</h3>
			<p className="mb-3 max-w-prose">{useOutcome(note)}</p>
			{note.takenTogether.length > 0 && (
				<p className="mb-3 max-w-prose">
					{t("weighting.figure.together", {
						districts: format.list(note.takenTogether.map((key) => nameOf.get(key) ?? key)),
					})}
				</p>
			)}
			<DataTable
				caption={t("weighting.figure.caption")}
				rows={note.totals}
				rowKey={({ of, group }) => `${of} ${group}`}
				columns={[
					{ key: "group", header: t("weighting.figure.group"), cell: (known) => nameTotal(known, note.stateFips) },
					{
						key: "total",
						header: t("weighting.figure.total"),
						numeric: true,
						cell: ({ total }) => format.number(total),
					},
					{
						key: "byDesign",
						header: t("weighting.figure.byDesign"),
						numeric: true,
						cell: ({ byDesign }) => format.number(byDesign, 1),
					},
				]}
			/>
		</>
	);
}

function useOutcome({ fallback, sweeps, smallest, largest }: CalibrationNote): string {
	const { t } = useTranslation("release");
	const format = useFormat();
	if (fallback) return t(`weighting.fallback.${fallback}`);
	const factors = { smallest: format.number(smallest, 3), largest: format.number(largest, 3) };
	return sweeps
		? t("weighting.figure.sweeps", { count: sweeps, value: format.number(sweeps), ...factors })
		: t("weighting.figure.solved", factors);
}

function useTotalName({ districts, frameStrata }: ToldFigure) {
	const { t } = useTranslation("release");
	const format = useFormat();
	const nameStratum = useStratumName();
	const nameOf = new Map(districts.map(({ key, name }) => [key, name]));
	const placeOf = new Map(frameStrata.map(({ stratumKey, ...place }) => [stratumKey, place]));
	return ({ of, group }: KnownTotal, stateFips: readonly string[]) => {
		if (of === "district" && group === restOfState) return t("weighting.figure.rest");
		if (of === "district") return t("weighting.figure.district", { name: nameOf.get(group) ?? group });
		if (of === "stratum")
			return t("weighting.figure.stratum", {
				name: nameStratum(group.split("+").flatMap((key) => placeOf.get(key) ?? [])),
			});
		return t("weighting.figure.bearing_trees", {
			name: format.list(stateFips.map((state) => t(`common:state.${state}`))),
		});
	};
}
