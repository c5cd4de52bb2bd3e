import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/data-changes";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { Paging } from "#app/components/paging.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listCellChanges } from "#app/publish/cell-changes.server.ts";
import { ReleaseNumber } from "#app/publish/release-number.ts";
import { findRelease, listEditions, listMeasures } from "#app/publish/releases.server.ts";
import { ChangesTable } from "./parts/release/changes-table.tsx";
import { ReleaseNotice } from "#app/components/release/release-state.tsx";

const PageNumber = z.coerce.number().int().min(1).max(100_000).catch(1);
const pageSize = 100;

/** What a release tells otherwise than the edition before it. A first edition has no such page. */
export async function loader({ params, request }: Route.LoaderArgs) {
	const number = ReleaseNumber.safeParse(params.release);
	const release = number.success ? await findRelease(number.data) : undefined;
	if (!release || release.edition === 1) throw refusal("release_not_found");
	const editions = await listEditions(release.seriesId);
	const previous = editions.find(({ edition }) => edition === release.edition - 1);
	if (!previous) throw refusal("release_not_found");
	const page = PageNumber.parse(new URL(request.url).searchParams.get("page") ?? 1);
	const told = { release, previous: { number: previous.number, withdrawn: previous.withdrawn }, page };
	// Figures of a withdrawn release are told nowhere, also not by what they differ from.
	if (release.withdrawn || previous.withdrawn) return { ...told, total: null, changes: [], measures: [] };
	const [found, own, earlier] = await Promise.all([
		listCellChanges(
			{ releaseId: release.releaseId, previousId: previous.releaseId },
			{ limit: pageSize, offset: (page - 1) * pageSize },
		),
		listMeasures(release.releaseId),
		listMeasures(previous.releaseId),
	]);
	const kept = new Set(own.map(({ key }) => key));
	return { ...told, ...found, measures: [...own, ...earlier.filter(({ key }) => !kept.has(key))] };
}

export default function DataChanges({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const { release, previous, page, total, changes, measures } = loaderData;
	const named = t("data.named", {
		number: release.number,
		title: wordsIn(release.title, i18n.language),
		season: release.season,
	});
	const linked = (number: number) => (
		<Link to={href("/data/:release", { release: `${number}` })}>{t("report.toRelease", { number })}</Link>
	);
	return (
		<Page
			title={t("data.changes.title", { number: release.number, previous: previous.number })}
			lead={t("data.changes.lead", { named })}
		>
			<ReleaseNotice release={release} />
			<p className="mb-6 flex flex-wrap gap-x-6">
				{linked(release.number)}
				{linked(previous.number)}
			</p>
			{total === null ? (
				<Notice tone="caution" title={t("data.changes.goneTitle")}>
					{t("data.changes.gone")}
				</Notice>
			) : changes.length === 0 ? (
				<EmptyState title={t("data.changes.none")}>{t("data.changes.noneBody")}</EmptyState>
			) : (
				<>
					<ChangesTable changes={changes} measures={measures} />
					<Paging page={page} pageCount={Math.ceil(total / pageSize)} total={total} />
					<p className="mt-4 max-w-prose text-sm text-quiet">{t("data.changes.note")}</p>
				</>
			)}
		</Page>
	);
}
