import { useTranslation } from "react-i18next";
import { useCellWords } from "#app/components/map/cell-words.ts";
import { useAreaName } from "#app/components/map/area-name.ts";
import type { DrawnPicture } from "#app/components/map/static-map.tsx";
import { MapPicture } from "#app/components/map/map-picture.tsx";
import { useMapFinding, type WholeFigure } from "#app/components/map/use-map-finding.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { MapFigures } from "#app/publish/figures.server.ts";
import { countedOn } from "./map-counts.ts";
import { columnName, useSeasonName } from "./map-pair.tsx";
import { useViewTitle } from "./use-view-title.ts";

export type ViewPictureProps = {
	/** One season's figures, or two seasons', the earlier first. */
	shown: MapFigures[];
	state: string | null;
	wholes: WholeFigure[];
	picture: DrawnPicture;
	/** Where the site is, for the citation. */
	baseUrl: string;
};

/** A view of the map as a drawing that says by itself what it shows, what its signs mean and where its figures come from. */
export function ViewPicture({ shown, state, wholes, picture, baseUrl }: ViewPictureProps) {
	const { t, i18n } = useTranslation("public");
	const areaName = useAreaName();
	const seasonName = useSeasonName();
	const last = shown.at(-1)!;
	const { measure, cropKey, kind, way, hue, classes } = last;
	const words = useCellWords(measure);
	const title = useViewTitle()({ measure, cropKey, state, shown });
	const finding = useMapFinding()({ measure, cropKey, state, wholes });
	const sources = useSources(baseUrl);
	return (
		<MapPicture
			finding={finding ?? title}
			subject={finding ? title : wordsIn(measure.description, i18n.language)}
			maps={shown.map((figures) => ({
				...figures,
				picture,
				name: shown.length > 1 ? seasonName(figures) : null,
				sentences: Object.fromEntries(figures.cells.map((cell) => [cell.areaKey, words(areaName(cell), cell)])),
			}))}
			legend={{
				counted: shown.map((figures) => countedOn(figures, picture, state)),
				names: shown.length > 1 ? shown.map((figures, index) => columnName(figures, shown[1 - index]!)) : [],
				classes,
				hue,
				measure,
			}}
			notes={[
				`${t(`map.classes.${way}`)} ${t(`map.counted.${kind}`)}`,
				t("map.withheldWhy"),
				...shown.flatMap(({ release }) => sources(release)),
			]}
		/>
	);
}

/** Where a release's figures come from, and how to cite them. */
function useSources(baseUrl: string) {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	return ({ number, season, title, publishedAt }: MapFigures["release"]): string[] => [
		t("map.source", { number, date: format.dayOf(publishedAt) }),
		t("data.one.citation", {
			network: t("data.one.network"),
			year: publishedAt.slice(0, 4),
			title: `${wordsIn(title, i18n.language)}, ${season}`,
			number,
			address: `${baseUrl}/data/${number}`,
		}),
	];
}
