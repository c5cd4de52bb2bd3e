import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { useFormat } from "#app/i18n/use-format.ts";
import type { EditionChanges } from "#app/publish/changes.server.ts";
import type { Release } from "#app/publish/release.ts";
import { ReleaseState } from "#app/components/release/release-state.tsx";

type EditionsProps = { editions: Release[]; own: number; changes: EditionChanges | null };

/** Every edition of one survey's figures, and how this one's numbers differ from those before it. */
export function Editions({ editions, own, changes }: EditionsProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	return (
		<>
			<ul className="space-y-2">
				{editions.map((edition) => (
					<li key={edition.releaseId} className="flex flex-wrap items-center gap-x-4 gap-y-1">
						<Link
							to={href("/data/:release", { release: `${edition.number}` })}
							aria-current={edition.number === own ? "page" : undefined}
						>
							{t("data.one.edition", {
								edition: format.number(edition.edition),
								number: edition.number,
								date: format.dayOf(edition.publishedAt),
							})}
						</Link>
						<ReleaseState release={edition} />
					</li>
				))}
			</ul>
			{changes && (
				<p className="mt-4 max-w-prose">
					{t("data.one.changes", {
						changed: format.number(changes.changed),
						shown: format.number(changes.shown),
						hidden: format.number(changes.hidden),
						same: format.number(changes.same),
					})}
				</p>
			)}
			{changes && (
				<p className="no-print mt-2">
					<Link to={href("/data/:release/changes", { release: `${own}` })}>{t("data.changes.link")}</Link>
				</p>
			)}
		</>
	);
}
