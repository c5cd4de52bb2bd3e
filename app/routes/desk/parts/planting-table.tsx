import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { usePlantingName } from "../../grower/parts/planting-name.ts";

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

type PlantingTableProps = { operation: { operationId: string; status: string; plantings: Planting[] } };

/** What one operation grows; what was taken out stays listed with its day, and can be put back. */
export function PlantingTable({ operation: { operationId, status, plantings } }: PlantingTableProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const isKept = status === "active";
	const add = isKept && (
		<ButtonLink to={href("/desk/growers/:operationId/plantings/new", { operationId })} kind="secondary" size="small">
			{t("orchard:plantings.add")}
		</ButtonLink>
	);
	return (
		<>
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
					...(isKept
						? [
								{
									key: "change",
									header: t("growers:planting.keep"),
									cell: (row: Planting) => <Keep planting={row} operationId={operationId} />,
								},
							]
						: []),
				]}
				empty={<EmptyState title={t("grower.noPlantingTitle")}>{t("grower.noPlantingBody")}</EmptyState>}
			/>
			{add && <p className="no-print mt-3">{add}</p>}
		</>
	);
}

function Keep({ planting, operationId }: { planting: Planting; operationId: string }) {
	const { t } = useTranslation("orchard");
	const name = usePlantingName()(planting);
	const { plantingId } = planting;
	if (planting.removedOn === null)
		return (
			<Link
				to={href("/desk/growers/:operationId/plantings/:plantingId", { operationId, plantingId })}
				aria-label={t("plantings.changeOf", { planting: name })}
			>
				{t("plantings.change")}
			</Link>
		);
	return (
		<Form method="post">
			<input type="hidden" name="plantingId" value={plantingId} />
			<Button
				kind="secondary"
				size="small"
				name="step"
				value="put_back"
				aria-label={t("plantings.putBackOf", { planting: name })}
			>
				{t("plantings.putBack")}
			</Button>
		</Form>
	);
}
