import { useTranslation } from "react-i18next";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { useFormat } from "#app/i18n/use-format.ts";

type Planting = {
	plantingId: string;
	cropKey: string;
	cultivar: string;
	bearingTrees: number;
	youngTrees: number;
	areaAcres: number | null;
	plantedYear: number | null;
	removedOn: string | null;
};

/** What one operation grows; what was taken out stays listed with its day. */
export function PlantingTable({ plantings }: { plantings: Planting[] }) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	return (
		<DataTable
			caption={t("grower.plantings")}
			captionHidden
			rows={plantings}
			rowKey={(row) => row.plantingId}
			columns={[
				{ key: "crop", header: t("grower.crop"), cell: (row) => t(`common:crop.${row.cropKey}`) },
				{ key: "cultivar", header: t("grower.cultivar"), cell: (row) => row.cultivar },
				{
					key: "bearing",
					header: t("growers.trees"),
					numeric: true,
					cell: (row) => format.number(row.bearingTrees),
				},
				{ key: "young", header: t("grower.young"), numeric: true, cell: (row) => format.number(row.youngTrees) },
				{
					key: "area",
					header: t("grower.area"),
					numeric: true,
					cell: (row) => (row.areaAcres === null ? t("grower.notKnown") : format.quantity(row.areaAcres, "acres", 1)),
				},
				{
					key: "planted",
					header: t("grower.plantedYear"),
					numeric: true,
					cell: (row) => row.plantedYear ?? t("grower.notKnown"),
				},
				{
					key: "removed",
					header: t("grower.status"),
					cell: (row) =>
						row.removedOn ? t("grower.removed", { day: format.day(row.removedOn) }) : t("grower.standing"),
				},
			]}
			empty={<EmptyState title={t("grower.noPlantingTitle")}>{t("grower.noPlantingBody")}</EmptyState>}
		/>
	);
}
