import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { ToldBlock } from "#app/components/report/report-data.ts";
import { wordsIn } from "#app/i18n/language.ts";

/** The photos that a report shows, each with the way to take it out again. */
export function PhotosToTakeAway({ reportId, blocks }: { reportId: string; blocks: ToldBlock[] }) {
	const { t, i18n } = useTranslation("report");
	const photos = blocks.filter((block) => block.type === "photo");
	if (photos.length === 0) return null;
	return (
		<ul className="mb-4 list-none">
			{photos.map(({ photo: photoId, alt }) => (
				<li key={photoId}>
					<Link
						to={href("/network/reports/:reportId/photos/:photoId", { reportId, photoId })}
						className="inline-flex min-h-11 items-center"
					>
						{t("photos.awayNamed", { alt: wordsIn(alt, i18n.language) })}
					</Link>
				</li>
			))}
		</ul>
	);
}
