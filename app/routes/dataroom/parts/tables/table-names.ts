import { useTranslation } from "react-i18next";
import { useAreaName } from "#app/components/map/area-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { measuresOf, type TableCatalogue } from "#app/publish/tables/catalogue.ts";
import type { Address } from "#app/publish/tables/layout.ts";
import { type TableDimension, tableDimensions } from "#app/publish/tables/selection.ts";

/** Names for the codes of a table, in the reader's language. */
export function useTableNames(catalogue: TableCatalogue) {
	const { t, i18n } = useTranslation("dataroom");
	const areaName = useAreaName();
	const numbers = catalogue.releases.map(({ number }) => number);
	const measures = measuresOf(catalogue, numbers);
	const areas = new Map(catalogue.areas.map((area) => [area.key, area]));
	const releases = new Map(catalogue.releases.map((release) => [`${release.number}`, release]));
	const nameOf = (dimension: TableDimension, code: string): string => {
		if (dimension === "crop") return t(`common:crop.${code}`);
		if (dimension === "measure") {
			const measure = measures.get(code);
			return measure ? wordsIn(measure.label, i18n.language) : code;
		}
		if (dimension === "season") {
			const season = releases.get(code)?.season ?? code;
			return t("tables.season", { season, number: code });
		}
		const area = areas.get(code);
		return area ? areaName({ areaKey: code, areaName: area.name, kind: area.kind }) : code;
	};
	return {
		nameOf,
		/** The names of some codes as one text, in the order of the dimensions. */
		textOf: (at: Address, but: Address = {}): string =>
			tableDimensions.flatMap((one) => (at[one] && !(one in but) ? [nameOf(one, at[one])] : [])).join(", "),
	};
}
