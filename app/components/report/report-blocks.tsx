import { useTranslation } from "react-i18next";
import { Caution } from "#app/components/caution.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { Chart } from "#app/components/chart/chart.tsx";
import { Figure } from "#app/components/figure.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { bandText } from "#app/components/map/cell-words.ts";
import { Legend } from "#app/components/map/legend.tsx";
import { type DrawnPicture, StaticMap } from "#app/components/map/static-map.tsx";
import { countUnasked } from "#app/components/map/unasked.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { CropTable } from "./crop-table.tsx";
import type { ToldBlock, ToldCell, ToldMeasure } from "./report-data.ts";
import { Passages } from "./passages.tsx";
import { useToldText } from "./told-words.tsx";

type ReportBlocksProps = {
	blocks: ToldBlock[];
	season: number;
	picture: DrawnPicture | null;
	/** Where a photo is: readers' own address shows those of published reports alone. */
	photoAddress: (photoId: string) => string;
};

/** The blocks of a report in their order. */
export function ReportBlocks({ blocks, season, picture, photoAddress }: ReportBlocksProps) {
	const { t, i18n } = useTranslation("public");
	const toldText = useToldText();
	return blocks.map((block) => {
		switch (block.type) {
			case "heading":
				return (
					<h2 key={block.id} className="mb-3 mt-10 border-t border-line pt-3 text-xl">
						{toldText(block.text)}
					</h2>
				);
			case "text":
				return <Passages key={block.id} passages={i18n.language === "es" ? block.text.es : block.text.en} />;
			case "figure":
				return <FigureBlock key={block.id} block={block} season={season} />;
			case "map":
				return <MapBlock key={block.id} block={block} season={season} picture={picture} />;
			case "table":
				return <TableBlock key={block.id} block={block} season={season} />;
			case "crops":
				return <CropsBlock key={block.id} block={block} season={season} />;
			case "chart":
				return <Chart key={block.id} drawn={block.drawn} season={season} />;
			case "caution":
				return <Caution key={block.id} caution={block.key} />;
			case "photo":
				return (
					<figure key={block.id} className="my-6 break-inside-avoid">
						<img
							src={photoAddress(block.photo)}
							alt={wordsIn(block.alt, i18n.language)}
							width={block.size?.widthPx}
							height={block.size?.heightPx}
							className="h-auto max-h-[70vh] w-auto max-w-full border border-line"
						/>
					</figure>
				);
			case "photo_gone":
				return <GonePhoto key={block.id} block={block} />;
			case "missing":
				return (
					<p key={block.id} className="my-4 text-quiet">
						{t("report.noFigure")}
					</p>
				);
		}
	});
}

type Of<T extends ToldBlock["type"]> = { block: Extract<ToldBlock, { type: T }>; season: number };

/** In the place of a photo that was taken away after it was shown. */
function GonePhoto({ block: { takenAway } }: { block: Extract<ToldBlock, { type: "photo_gone" }> }) {
	const { t } = useTranslation("report");
	const format = useFormat();
	return (
		<p className="my-6 break-inside-avoid border border-line px-4 py-3 text-quiet">
			{t(`photos.gone.${takenAway.because}`, { date: format.dayOf(takenAway.at) })}
		</p>
	);
}

function useTitle() {
	const { t, i18n } = useTranslation("public");
	return (measure: ToldMeasure, cropKey: string, season: number) =>
		t("map.shown", { measure: wordsIn(measure.label, i18n.language), crop: t(`common:crop.${cropKey}`), season });
}

function FigureBlock({ block: { figure }, season }: Of<"figure">) {
	const { t } = useTranslation("public");
	const title = useTitle();
	const areaName = useAreaName();
	if (!figure || "count" in figure) return <p className="my-4 text-quiet">{t("report.noFigure")}</p>;
	const { measure, cell } = figure;
	return (
		<div className="my-6 break-inside-avoid border-y-2 border-line py-5">
			<Figure {...cell} status={toldStatus(cell)} measure={measure} size="headline" />
			<p className="mt-3">
				{t("report.figureOf", { title: title(measure, cell.cropKey, season), area: areaName(cell) })}
				{cell.respondentsBand && ` ${t("map.said.bandAlone", { band: bandText(cell.respondentsBand) })}`}
			</p>
		</div>
	);
}

function MapBlock({ block, season, picture }: Of<"map"> & { picture: DrawnPicture | null }) {
	const { t } = useTranslation("public");
	const title = useTitle()(block.measure, block.cropKey, season);
	if (!picture) return null;
	const { cells, classes, areaOfCounty, measure } = block;
	return (
		<figure className="my-6 grid gap-4 sm:grid-cols-[1fr_15rem]">
			<StaticMap
				picture={picture}
				cells={cells}
				classes={classes}
				areaOfCounty={areaOfCounty}
				hue={measure.hue}
				label={t("map.alternative", { title })}
			/>
			<figcaption>
				<Legend
					title={title}
					cells={cells}
					classes={classes}
					unasked={countUnasked({ picture, areaOfCounty, cells })}
					hue={measure.hue}
					measure={measure}
				/>
				<p className="mt-3 text-sm text-quiet">{t("map.withheldWhy")}</p>
			</figcaption>
		</figure>
	);
}

function TableBlock({ block: { measure, cropKey, kind, cells }, season }: Of<"table">) {
	const title = useTitle()(measure, cropKey, season);
	const columns = useAreaColumns(measure, kind);
	return (
		<div className="my-6">
			<DataTable caption={title} columns={columns} rows={cells} rowKey={(row) => row.areaKey} />
		</div>
	);
}

function useAreaColumns(measure: ToldMeasure, kind: string): Column<ToldCell>[] {
	const { t } = useTranslation("public");
	const areaName = useAreaName();
	return [
		{ key: "area", header: t(`common:areaKind.${kind}`), cell: areaName },
		{
			key: "value",
			header: t("map.table.value"),
			cell: (row) => <Figure {...row} status={toldStatus(row)} measure={measure} />,
		},
		{
			key: "band",
			header: t("map.table.band"),
			numeric: true,
			cell: (row) => (row.respondentsBand ? bandText(row.respondentsBand) : ""),
		},
	];
}

function CropsBlock({ block: { measure, areaName, cells }, season }: Of<"crops">) {
	const { t, i18n } = useTranslation("public");
	const caption = t("report.cropsOf", { measure: wordsIn(measure.label, i18n.language), area: areaName, season });
	return (
		<div className="my-6">
			<CropTable caption={caption} rows={cells} measure={measure} />
		</div>
	);
}

/** A shown cell without this measure's figure was not asked for it. */
function toldStatus(cell: ToldCell) {
	return cell.status === "shown" && cell.steadiness === null ? null : cell.status;
}
