import { useId } from "react";
import { useTranslation } from "react-i18next";
import type { DrawnPicture } from "#app/components/map/static-map.tsx";
import { pointsOfPath } from "#app/lib/geography/short-path.ts";
import { outerEdge, pathOfEdges } from "#app/components/map/outer-edge.ts";
import { MapPatterns } from "#app/components/map/patterns.tsx";
import "#app/components/map/map.css";

export type Grouping = {
	districts: { name: string; counties: string[] }[];
	shown: number;
	withheld: number;
	told: string[];
	untold: string[];
};

/** A state's counties with the borders of its districts, and which counties are told in some figure. */
export function DistrictMap({
	picture,
	grouping,
	title,
	label,
}: {
	picture: DrawnPicture;
	grouping: Grouping;
	title: string;
	/** What the picture tells in words, where it does not tell of answers. */
	label?: string;
}) {
	const { t } = useTranslation("districts");
	const id = useId();
	const told = new Set(grouping.told);
	const untold = new Set(grouping.untold);
	const outlineOf = new Map(picture.counties.map(({ fips, outline }) => [fips, outline]));
	const look = (fips: string) => {
		if (told.has(fips)) return { className: "map-county map-told" };
		if (untold.has(fips)) return { className: "map-county", fill: `url(#${id}-withheld)` };
		return { className: "map-county map-blank" };
	};
	return (
		<figure className="min-w-0 flex-1">
			<figcaption className="mb-1 font-bold">{title}</figcaption>
			<svg
				viewBox={`0 0 ${picture.width} ${picture.height}`}
				role="img"
				aria-label={`${title}: ${label ?? t("mapLabel", { told: told.size, untold: untold.size })}`}
				className="block h-auto max-h-[32rem] w-full"
			>
				<MapPatterns id={id} />
				{picture.counties.map(({ fips, outline }) => (
					<path key={fips} d={outline} {...look(fips)} />
				))}
				{grouping.districts.map(({ name, counties }) => (
					<path
						key={name}
						d={pathOfEdges(outerEdge(counties.flatMap((fips) => pointsOfPath(outlineOf.get(fips) ?? ""))))}
						className="map-states"
					/>
				))}
			</svg>
		</figure>
	);
}

/** What the signs on both maps mean. */
export function DistrictLegend() {
	const { t } = useTranslation("districts");
	const id = useId();
	const signs = [
		{ key: "told", look: { className: "map-county map-told" } },
		{ key: "untold", look: { className: "map-county", fill: `url(#${id}-withheld)` } },
		{ key: "none", look: { className: "map-county map-blank" } },
	] as const;
	return (
		<ul className="mt-3 flex flex-wrap gap-x-6 gap-y-1 text-sm">
			{signs.map(({ key, look }) => (
				<li key={key} className="inline-flex items-center gap-2">
					<svg width="20" height="14" aria-hidden="true">
						{key === "untold" && <MapPatterns id={id} />}
						<rect x="0.5" y="0.5" width="19" height="13" {...look} />
					</svg>
					{t(`legend.${key}`)}
				</li>
			))}
		</ul>
	);
}
