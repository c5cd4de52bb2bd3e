import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { type SizeClass, sizeClasses, sizeClassFrom } from "#app/collect/frame.ts";
import type { FramePart } from "#app/collect/frame-parts.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { groupBy } from "#app/lib/group-by.ts";

type FramePartsProps = {
	surveyId: string;
	parts: FramePart[];
	/** When it was frozen, as the page tells it; null for a draft, of which is shown who would be asked now. */
	frozen: string | null;
	leftOut: number;
};

/** Whom a survey asks, and why: by state and size, as its frame is or would be. */
export function FrameParts({ surveyId, parts, frozen, leftOut }: FramePartsProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const states = [...groupBy(parts, ({ stateFips }) => stateFips)].toSorted(([a], [b]) => a.localeCompare(b));
	const rows = states.map(([stateFips, of]) => ({ key: stateFips, name: t(`common:state.${stateFips}`), of }));
	if (rows.length > 1) rows.push({ key: "all", name: t("frame.all"), of: parts });
	const sum = (of: FramePart[], by: (part: FramePart) => number) =>
		format.number(of.reduce((n, part) => n + by(part), 0));
	const ofSize = (sizeClass: SizeClass) => ({
		key: sizeClass,
		header: t(`frame.${sizeClass}`, {
			medium: format.number(sizeClassFrom.medium),
			below: format.number(sizeClassFrom.large - 1),
			large: format.number(sizeClassFrom.large),
		}),
		numeric: true,
		cell: ({ of }: { of: FramePart[] }) =>
			sum(
				of.filter((part) => part.sizeClass === sizeClass),
				({ operations }) => operations,
			),
	});
	return (
		<Section title={t(frozen ? "frame.title" : "frame.titleDraft")}>
			<p className="mb-4 max-w-prose">{frozen ? t("frame.why", { moment: frozen }) : t("frame.whyDraft")}</p>
			<DataTable
				caption={t("frame.caption")}
				captionHidden
				rows={rows}
				rowKey={(row) => row.key}
				columns={[
					{ key: "state", header: t("common:areaKind.state"), cell: (row) => row.name },
					...sizeClasses.map(ofSize),
					{
						key: "operations",
						header: t("frame.operations"),
						numeric: true,
						cell: ({ of }) => sum(of, ({ operations }) => operations),
					},
					{
						key: "trees",
						header: t("frame.trees"),
						numeric: true,
						cell: ({ of }) => sum(of, ({ bearingTrees }) => bearingTrees),
					},
				]}
				empty={<p>{t("survey.refused.nobody_in_frame")}</p>}
			/>
			{leftOut > 0 && (
				<p className="mt-3 text-quiet">{t("frame.leftOut", { count: leftOut, value: format.number(leftOut) })}</p>
			)}
			{frozen && (
				<p className="no-print mt-3">
					<Link to={href("/desk/surveys/:surveyId/responses", { surveyId })}>{t("frame.each")}</Link>
				</p>
			)}
		</Section>
	);
}
