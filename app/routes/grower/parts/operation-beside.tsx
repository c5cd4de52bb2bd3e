import { useTranslation } from "react-i18next";
import type { OwnFacts, OwnFigure } from "#app/collect/own-facts.server.ts";
import { BesideChart } from "#app/components/chart/beside-chart.tsx";
import { Figure } from "#app/components/figure.tsx";
import { Section } from "#app/components/section.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { compareCrops } from "#app/directory/crops.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Comparison } from "#app/publish/comparison.server.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";
import { useBesideWords } from "./beside-words.ts";

type Beside = OwnFacts & Pick<Comparison, "measures" | "cells">;
type Cell = Comparison["cells"][string];

/** One operation crop by crop: each of its figures with that of the smallest area around it that is shown. */
export function OperationBeside({ operation }: { operation: Beside }) {
	const { t, i18n } = useTranslation("orchard");
	const { name, figures, measures, cells } = operation;
	const crops = [...new Set(figures.map(({ cropKey }) => cropKey))].toSorted(compareCrops);
	return (
		<Section title={name}>
			{crops.map((crop) => (
				<Section key={crop} title={t(`common:crop.${crop}`)} level={3}>
					<ul>
						{measures.map((measure) => {
							const own = figures.find((figure) => figure.cropKey === crop && figure.measureKey === measure.key);
							return (
								own && (
									<li key={measure.key} className="border-b border-rule py-4 break-inside-avoid">
										<h4>{wordsIn(measure.label, i18n.language)}</h4>
										<Pair own={own} measure={measure} cell={cells[`${measure.key}|${crop}`]} />
									</li>
								)
							);
						})}
					</ul>
				</Section>
			))}
		</Section>
	);
}

function Pair({ own, measure, cell }: { own: OwnFigure; measure: ReleaseMeasure; cell: Cell | undefined }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const nameOf = useAreaName();
	const besideWords = useBesideWords();
	const sentence = cell && besideWords({ own, measure, cell });
	return (
		<>
			{sentence && <p className="mt-1 font-bold">{sentence}</p>}
			{cell && sentence && !own.yesOrNo && (
				<div className="mt-2">
					<BesideChart
						own={{ label: t("compare.you"), value: own.value }}
						area={{ label: nameOf(cell), cell }}
						measure={measure}
						alternative={sentence}
					/>
				</div>
			)}
			<dl className="mt-2 grid gap-x-8 gap-y-2 sm:grid-cols-2">
				<div>
					<dt className="text-base text-quiet">{t("compare.you")}</dt>
					<dd className="font-bold">
						{own.yesOrNo ? t(own.value > 0 ? "compare.yes" : "compare.no") : format.figure(own.value, measure)}
					</dd>
				</div>
				<div>
					<dt className="text-base text-quiet">{cell ? nameOf(cell) : t("compare.around")}</dt>
					<dd>{cell ? <Figure {...cell} measure={measure} /> : t("compare.noneShown")}</dd>
				</div>
			</dl>
		</>
	);
}
