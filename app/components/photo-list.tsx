import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";

type PhotoListProps = {
	photoIds: string[];
	/** Where a photo is; without it there is nothing to show but how many there are. */
	hrefOf?: (photoId: string) => string;
};

/** Photos, small, each leading to its whole. */
export function PhotoList({ photoIds, hrefOf }: PhotoListProps) {
	const { t } = useTranslation();
	const format = useFormat();
	if (photoIds.length === 0) return <span className="text-quiet">{t("photos.erased")}</span>;
	const count = t("photos.count", { count: photoIds.length, value: format.number(photoIds.length) });
	if (!hrefOf) return count;
	return (
		<ul aria-label={count} className="flex list-none flex-wrap gap-3">
			{photoIds.map((photoId, at) => (
				<li key={photoId}>
					<PhotoLink href={hrefOf(photoId)} number={at + 1} />
				</li>
			))}
		</ul>
	);
}

/** One photo, small, which leads to its whole. */
export function PhotoLink({ href, number }: { href: string; number: number }) {
	const { t } = useTranslation();
	const format = useFormat();
	return (
		<a href={href} className="inline-block">
			<img
				src={`${href}?size=small`}
				alt={t("photos.alt", { number: format.number(number) })}
				loading="lazy"
				width={112}
				height={112}
				className="size-28 border border-line bg-paper object-cover"
			/>
		</a>
	);
}
