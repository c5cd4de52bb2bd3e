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
	const told = ({ values, measure }: MovedEstimate, at: number): string | null => {
		const value = values[at] ?? null;
		return value === null ? null : format.figure(value, { ...measure, decimals: measure.decimals + 1 });
	};
	const figure = (row: MovedEstimate, at: number) =>
		told(row, at) ?? <span className="text-quiet">{t("moved.noFigure")}</span>;
	if (moved.rows.length === 0) return null;
	const rows = moved.rows.filter((row) => told(row, 0) !== told(row, 1));
	const stay = moved.rows.length - rows.length;
	return (
		<Section title={t("moved.title")} id="estimates">
			<p className="mb-3 max-w-prose">{t(`moved.lead.${moved.to}`)}</p>
			<DataTable
				caption={t("moved.caption", { crop: t(`common:crop.${moved.cropKey}`) })}
				rows={rows}
				rowKey={({ area, measure }) => `${measure.key} ${area.key}`}
				columns={[
					{ key: "measure", header: t("moved.measure"), cell: ({ measure }) => wordsIn(measure.label, i18n.language) },
					{
						key: "area",
						header: t("queue.area"),
						cell: ({ area }) => nameArea({ areaKey: area.key, areaName: area.name, kind: area.kind }),
					},
					{ key: "from", header: t(`moved.from.${moved.from}`), numeric: true, cell: (row) => figure(row, 0) },
					{
						key: "to",
						header: t(`moved.to_.${moved.to}`),
						numeric: true,
						cell: (row) => <strong>{figure(row, 1)}</strong>,
					},
				]}
				empty={<p>{t("moved.unmoved")}</p>}
			/>
			{rows.length > 0 && stay > 0 && (
				<p className="mt-3 max-w-prose text-sm text-quiet">
					{t("moved.others", { count: stay, value: format.number(stay) })}
				</p>
			)}
		</Section>
	);
}
