import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { FrozenFrame } from "#app/collect/frozen-frames.server.ts";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

/** What a change of plantings means for surveys under way: their frames were frozen when they opened. */
export function FrozenFrames({ frames }: { frames: FrozenFrame[] }) {
	const { t, i18n } = useTranslation("growers");
	const format = useFormat();
	if (frames.length === 0) return null;
	const cropsOf = ({ crops }: FrozenFrame) =>
		format.list(
			crops.map(({ cropKey, bearingTrees }) =>
				t("planting.frozenCrop", {
					crop: t(`common:crop.${cropKey}`),
					trees: format.quantity(bearingTrees, "trees"),
				}),
			),
		);
	return (
		<Notice tone="info" title={t("planting.frozenTitle")}>
			<ul className="list-disc pl-6">
				{frames.map((frame) => (
					<li key={frame.surveyId}>
						<Link to={href("/desk/surveys/:surveyId", { surveyId: frame.surveyId })}>
							{t("desk:surveys.name", { title: wordsIn(frame.title, i18n.language), season: frame.season })}
						</Link>
						{`: ${cropsOf(frame)}`}
					</li>
				))}
			</ul>
			<p className="mt-2">{t("planting.frozenBody")}</p>
		</Notice>
	);
}
