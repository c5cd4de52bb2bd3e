import { useTranslation } from "react-i18next";
import { useAreaName } from "#app/components/map/area-name.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { lookOf, numbered, type Shown } from "./chart-look.ts";
import { isApart } from "#app/lib/likely-range.ts";

/** What a chart shows first, as a sentence. Figures whose likely ranges overlap are never told as if they differed for sure. */
export function useFinding() {
	const ranked = useRanked();
	const ofSeasons = useSeasonFinding();
	const { t, i18n } = useTranslation("report");
	const format = useFormat();
	const cropName = useCropSaid();
	return (drawn: ResolvedChart): string => {
		switch (drawn.chart) {
			case "crops":
			case "areas":
				return ranked(drawn);
			case "seasons":
				return ofSeasons(drawn);
			case "windows": {
				const [first] = drawn.rows;
				const days = numbered((first?.cells ?? []).flatMap((cell) => cell ?? [])).flatMap(({ value }) => value ?? []);
				const measure = drawn.measures[0];
				if (!first || !measure || days.length < 2) return t("chart.finding.none");
				const range = format.range(Math.min(...days), Math.max(...days), measure);
				return t("chart.finding.windows", { crop: cropName(first.cropKey), range });
			}
			case "causes": {
				const [row] = drawn.rows;
				const part = drawn.parts[0];
				const cell = row?.parts[0];
				if (!row || !part || !cell || numbered([cell, row.whole]).length < 2) return t("chart.finding.none");
				return t([`chart.finding.causes_${row.cropKey}`, "chart.finding.causes"], {
					crop: cropName(row.cropKey),
					cause: wordsIn(part.label, i18n.language),
					part: format.figure(cell.value ?? 0, part),
					whole: format.figure(row.whole.value ?? 0, drawn.measure),
				});
			}
		}
	};
}

/** Crops as a sentence names them: "apples" and not "Apple". */
function useCropSaid() {
	const { t } = useTranslation();
	return (crop: string) => t([`public:crop_said.${crop}`, `common:crop.${crop}`]);
}

function useRanked() {
	const { t, i18n } = useTranslation("report");
	const format = useFormat();
	const areaName = useAreaName();
	const cropName = useCropSaid();
	return (drawn: Extract<ResolvedChart, { chart: "crops" | "areas" }>): string => {
		const rows: (Shown & { name: string })[] =
			drawn.chart === "crops"
				? drawn.rows.map((row) => ({ ...row, name: cropName(row.cropKey) }))
				: drawn.rows.map((row) => ({ ...row, name: areaName(row) }));
		const [first, second] = numbered(rows);
		if (!first) return t("chart.finding.none");
		const said = {
			measure: wordsIn(drawn.measure.label, i18n.language),
			name: first.name,
			value: format.figure(first.value ?? 0, drawn.measure),
		};
		const end = drawn.measure.unit === "day" ? "early" : drawn.worse === "less" ? "low" : "high";
		if (!second) return t("chart.finding.only", said);
		if (isApart(first, second)) return t(`chart.finding.${end}`, said);
		return t(`chart.finding.${end}_close`, { ...said, second: second.name });
	};
}

function useSeasonFinding() {
	const { t, i18n } = useTranslation("report");
	const format = useFormat();
	const cropName = useCropSaid();
	return ({ measure, cropKey, rows }: Extract<ResolvedChart, { chart: "seasons" }>): string => {
		const latest = rows.at(-1);
		const told = rows.filter(({ cell }) => lookOf(cell) === "number");
		const [last, now] = [told.at(-2), told.at(-1)];
		if (!latest || !now) return t("chart.finding.none");
		const said = {
			measure: wordsIn(measure.label, i18n.language),
			crop: cropName(cropKey),
			value: format.figure(now.cell.value ?? 0, { ...measure, season: now.season }),
			season: now.season,
		};
		if (now !== latest) return t("chart.finding.season_none", { ...said, latest: latest.season });
		if (!last) return t("chart.finding.season_alone", said);
		const before = {
			lastValue: format.figure(last.cell.value ?? 0, { ...measure, season: last.season }),
			last: last.season,
		};
		const end = measure.unit === "day" ? ["earlier", "later"] : ["less", "more"];
		const key = isApart(now.cell, last.cell) ? end[(now.cell.value ?? 0) < (last.cell.value ?? 0) ? 0 : 1] : "alike";
		return t(`chart.finding.season_${key}`, { ...said, ...before });
	};
}
