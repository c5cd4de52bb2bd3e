import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Kept, PlannedFigure } from "#app/collect/brief.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type PlanTableProps = {
	planned: readonly PlannedFigure[];
	held: { number: number; kept: Kept[] };
	labelOf: ReadonlyMap<string, string>;
};

/** What was planned beside what the release told. */
export function PlanTable({ planned, held, labelOf }: PlanTableProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const rows = planned.flatMap((one, at) => {
		const kept = held.kept[at];
		return kept ? [{ ...one, ...kept, at }] : [];
	});
	const wanted = ({ smallestN, largestCv }: PlannedFigure) =>
		[
			smallestN === null ? "" : t("brief.wantedN", { count: smallestN, value: format.number(smallestN) }),
			largestCv === null ? "" : t("brief.wantedCv", { cv: format.quantity(largestCv * 100, "percent", 1) }),
		]
			.filter(Boolean)
			.join("; ") || t("brief.wantedAny");
	return (
		<Section title={t("brief.heldTitle")}>
			<p className="mb-4">
				{t("brief.heldLead")}{" "}
				<Link to={href("/data/:release", { release: String(held.number) })}>
					{t("brief.heldRelease", { number: format.number(held.number) })}
				</Link>
			</p>
			<DataTable
				caption={t("brief.heldTitle")}
				captionHidden
				rows={rows}
				rowKey={(row) => String(row.at)}
				columns={[
					{
						key: "figure",
						header: t("brief.figure"),
						cell: (row) =>
							t("brief.figureOf", {
								measure: labelOf.get(row.measureKey) ?? row.measureKey,
								crop: t(`common:crop.${row.cropKey}`),
								level: t(`brief.levels.${row.level}`),
							}),
					},
					{ key: "wanted", header: t("brief.wanted"), cell: wanted },
					{ key: "areas", header: t("brief.areas"), numeric: true, cell: (row) => format.number(row.areas) },
					{ key: "told", header: t("brief.told"), numeric: true, cell: (row) => format.number(row.told) },
					{ key: "kept", header: t("brief.asPlanned"), numeric: true, cell: (row) => format.number(row.asPlanned) },
				]}
			/>
		</Section>
	);
}
