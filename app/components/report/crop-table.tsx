import { useTranslation } from "react-i18next";
import { Link } from "react-router";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Figure } from "#app/components/figure.tsx";
import { bandText } from "#app/components/map/cell-words.ts";
import type { FigureShape } from "#app/lib/format.ts";

type Row = {
	cropKey: string;
	status: "shown" | "withheld" | "no_growers";
	value: number | null;
	lower: number | null;
	upper: number | null;
	quartiles: { first: number; third: number } | null;
	steadiness: "steady" | "care" | "rough" | null;
	respondentsBand: string | null;
};
type CropTableProps = {
	caption: string;
	captionHidden?: boolean;
	rows: Row[];
	measure: FigureShape;
	linkTo?: (cropKey: string) => string;
};

/** One measure, crop by crop. */
export function CropTable({ caption, captionHidden, rows, ...shown }: CropTableProps) {
	const columns = useCropColumns(shown);
	return (
		<DataTable
			caption={caption}
			captionHidden={captionHidden}
			columns={columns}
			rows={rows}
			rowKey={(row) => row.cropKey}
		/>
	);
}

function useCropColumns({
	measure,
	linkTo,
}: Omit<CropTableProps, "caption" | "captionHidden" | "rows">): Column<Row>[] {
	const { t } = useTranslation("public");
	return [
		{
			key: "crop",
			header: t("table.crop"),
			cell: ({ cropKey }) => {
				const name = t(`common:crop.${cropKey}`);
				return linkTo ? (
					<Link to={linkTo(cropKey)} className="print-plain">
						{name}
					</Link>
				) : (
					name
				);
			},
		},
		{
			key: "value",
			header: t("map.table.value"),
			cell: (row) => (
				<Figure {...row} status={row.status === "shown" && !row.steadiness ? null : row.status} measure={measure} />
			),
		},
		{
			key: "band",
			header: t("map.table.band"),
			numeric: true,
			cell: (row) => (row.respondentsBand ? bandText(row.respondentsBand) : ""),
		},
	];
}
