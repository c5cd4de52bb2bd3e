import { useTranslation } from "react-i18next";
import { href } from "react-router";

const files = ["map.png", "map.svg", "map.csv"] as const;

/** This very view to take along: as a picture to put on a page or a slide, one to enlarge, and its figures as data. */
export function MapFiles({ search, language }: { search: URLSearchParams; language: string }) {
	const { t } = useTranslation("public");
	const address = new URLSearchParams(search);
	// What only the page has: a picture holds no table, and no area is chosen in it.
	for (const key of ["area", "find", "q", "sort", "direction", "page"]) address.delete(key);
	address.set("lang", language);
	return (
		<section aria-label={t("map.files.title")} className="no-print mt-8 border-t border-rule pt-4">
			<p className="font-bold">{t("map.files.title")}</p>
			<ul className="mt-2 flex list-none flex-wrap gap-x-6 gap-y-2">
				{files.map((file) => (
					<li key={file}>
						<a href={`${href("/map/:file", { file })}?${address}`} download>
							{t(`map.files.${file.slice(4)}`)}
						</a>
					</li>
				))}
			</ul>
			<p className="mt-2 max-w-prose text-sm text-quiet">{t("map.files.note")}</p>
		</section>
	);
}
