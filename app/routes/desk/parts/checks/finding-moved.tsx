import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FindingView } from "./finding-view.server.ts";
import type { MovedEstimate } from "./moved-estimates.server.ts";

/** The estimates before and after, for the grower's county, district and state. */
export function FindingMoved({ moved }: { moved: FindingView["moved"] }) {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	const nameArea = useAreaName();
	// A decimal more than is published, as one answer can move less than the last digit shown.
	const figure = ({ values, measure }: MovedEstimate, at: number) => {
		const value = values[at] ?? null;
		const shape = { ...measure, decimals: measure.decimals + 1 };
		return value === null ? <span className="text-quiet">{t("moved.noFigure")}</span> : format.figure(value, shape);
	};
	if (moved.rows.length === 0) return null;
	return (
		<Section title={t("moved.title")} id="estimates">
			<p className="mb-3 max-w-prose">{t(`moved.lead.${moved.to}`)}</p>
			<DataTable
				caption={t("moved.caption", { crop: t(`common:crop.${moved.cropKey}`) })}
				rows={moved.rows}
				rowKey={({ area, measure }) => `${measure.key} ${area.key}`}
				columns={[
					{ key: "measure", header: t("moved.measure"), cell: ({ measure }) => wordsIn(measure.label, i18n.language) },
					{ key: "area", header: t("queue.area"), cell: ({ area }) => nameArea({ ...area, areaName: area.name }) },
					{ key: "from", header: t(`moved.from.${moved.from}`), numeric: true, cell: (row) => figure(row, 0) },
					{
						key: "to",
						header: t(`moved.to_.${moved.to}`),
						numeric: true,
						cell: (row) => <strong>{figure(row, 1)}</strong>,
					},
				]}
			/>
		</Section>
	);
}
