import { useTranslation } from "react-i18next";
import { AnswerText } from "#app/components/answer-list.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { useAboutLabel } from "./about-label.ts";
import type { FindingView } from "./finding-view.server.ts";
import type { AboutShown } from "./queue.server.ts";

/** The answers beside what the grower had told, last season's, and those of like operations. */
export function FindingAnswers({ view }: { view: FindingView }) {
	const { t } = useTranslation("checks");
	const label = useAboutLabel();
	return (
		<Section title={t("finding.answers")}>
			<DataTable
				caption={t("finding.answers")}
				captionHidden
				rows={view.answers.map((answer, at) => ({ ...answer, at }))}
				rowKey={({ at }) => String(at)}
				columns={[
					{ key: "question", header: t("finding.question"), cell: ({ asFound }) => asFound && label(asFound) },
					{ key: "own", header: t("finding.own"), cell: ({ own }) => <Shown about={own} /> },
					{
						key: "now",
						header: t("finding.counts"),
						cell: ({ now, isSetAside }) =>
							isSetAside ? <strong>{t("outcome.set_aside")}</strong> : <Shown about={now} />,
					},
					{ key: "last", header: t("finding.last"), cell: ({ last }) => <Shown about={last} /> },
				]}
			/>
			<LikeOperations view={view} />
		</Section>
	);
}

function Shown({ about }: { about: AboutShown | undefined }) {
	const { t } = useTranslation();
	return about ? (
		<AnswerText shown={about.shown} />
	) : (
		<span className="text-quiet">{t("answerKind.not_provided")}</span>
	);
}

function LikeOperations({ view: { like, finding } }: { view: FindingView }) {
	const { t, i18n } = useTranslation("checks");
	const format = useFormat();
	if (!like) return null;
	const shape = { unit: like.perPlant ? ("lb_per_tree" as const) : like.unit, decimals: 1, season: 0 };
	const perPlant = like.perPlant && like.unit === "lb";
	const told = (value: number) => format.figure(value, perPlant ? shape : { ...shape, unit: like.unit, decimals: 0 });
	const [first, median, third] = like.quartiles;
	return (
		<p className="mt-4 max-w-prose">
			{t("finding.like", {
				count: like.count,
				value: format.number(like.count),
				area: t(`told.area.${like.area}`),
				crop: t(`common:crop.${finding.cropKey}`),
				label: wordsIn(like.label, i18n.language),
				median: told(median),
				first: told(first),
				third: told(third),
			})}{" "}
			{like.own !== null && t("finding.likeOwn", { own: told(like.own) })}
		</p>
	);
}
