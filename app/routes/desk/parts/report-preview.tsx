import { useTranslation } from "react-i18next";
import { href } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { ReportBlocks } from "#app/components/report/report-blocks.tsx";
import type { ToldReport } from "#app/components/report/report-data.ts";
import { ToldText, useToldText } from "#app/components/report/told-words.tsx";

/** Photos that are not published yet are shown to associates and to coordinators, each in their own area. */
const photosAt = {
	desk: (photoId: string) => href("/desk/report-photos/:photoId", { photoId }),
	network: (photoId: string) => href("/network/report-photos/:photoId", { photoId }),
};
type ReportPreviewProps = { told: ToldReport; published?: boolean; area?: keyof typeof photosAt };

/** Whether anything in a report points to what its release does not hold: a block, or a figure in a text. */
function lacksFigure(part: unknown): boolean {
	if (typeof part !== "object" || part === null) return false;
	if ("type" in part && part.type === "missing") return true;
	return Object.entries(part).some(([name, value]) => (name === "figure" && value === null) || lacksFigure(value));
}

/** A report as its readers will see it, marked as not published. */
export function ReportPreview({ told, published = false, area = "desk" }: ReportPreviewProps) {
	const { t } = useTranslation("public");
	const toldText = useToldText();
	return (
		<article className="max-w-4xl border border-line p-5 sm:p-8">
			{!published && <p className="mb-4 text-sm font-bold text-attention">{t("report_editor.notPublished")}</p>}
			{!published && lacksFigure(told) && (
				<Notice tone="attention">{t("report:editor.noFigures", { words: t("report.noFigure") })}</Notice>
			)}
			<p className="text-2xl font-bold">{toldText(told.title)}</p>
			<div className="mt-3 text-lg text-quiet">
				<ToldText told={told.summary} />
			</div>
			<ReportBlocks blocks={told.blocks} season={told.season} picture={told.picture} photoAddress={photosAt[area]} />
		</article>
	);
}
