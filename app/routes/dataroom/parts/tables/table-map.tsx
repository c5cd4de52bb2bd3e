import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Legend } from "#app/components/map/legend.tsx";
import { StaticMap } from "#app/components/map/static-map.tsx";
import type { Picture } from "#app/publish/picture.server.ts";
import type { TableMap } from "#app/publish/tables/views.ts";
import { useTableNames } from "./table-names.ts";
import type { TablePage } from "./table-page.ts";

type TableMapProps = { map: TableMap; picture: Picture; catalogue: TablePage["catalogue"] };

/** The table's own areas on the map, drawn as everywhere; what is not in the table is left plain. */
export function TableMapView({ map, picture, catalogue }: TableMapProps) {
	const { t } = useTranslation("dataroom");
	const { textOf } = useTableNames(catalogue);
	const { release, measure, cropKey, kind, cells, classes, areaOfCounty } = map;
	const title = textOf({ measure: measure.key, crop: cropKey, season: `${release}` });
	const search = new URLSearchParams({ release: `${release}`, measure: measure.key, crop: cropKey, kind });
	return (
		<div className="my-8 grid grid-cols-[minmax(0,1fr)] gap-6 lg:grid-cols-[minmax(0,1fr)_17rem]">
			<StaticMap
				{...{ picture, cells, classes, areaOfCounty }}
				hue={measure.hue}
				label={t("public:map.alternative", { title })}
			/>
			<div>
				<Legend {...{ title, cells, classes, measure }} unasked={0} hue={measure.hue} />
				<p className="mt-4 text-sm text-quiet">{t(`public:map.counted.${kind}`)}</p>
				<p className="mt-4 text-sm text-quiet">{t("tables.mapPlain")}</p>
				<p className="mt-4 text-sm">
					<Link to={`${href("/map")}?${search}`}>{t("tables.mapLink")}</Link>
				</p>
			</div>
		</div>
	);
}
