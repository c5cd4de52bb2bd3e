import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/data-release";
import { ButtonLink } from "#app/components/button.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { env } from "#app/lib/env.server.ts";
import { helpContact } from "#app/lib/help-contact.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listCellPage } from "#app/publish/api/list-cells.server.ts";
import { findAskedForm } from "#app/publish/asked-form.server.ts";
import { dcatDataset, schemaOrgDataset } from "#app/publish/catalogue-record.ts";
import { findChanges } from "#app/publish/changes.server.ts";
import { listFiles } from "#app/publish/release-files.server.ts";
import { ReleaseNumber } from "#app/publish/release-number.ts";
import type { Release } from "#app/publish/release.ts";
import {
	countCells,
	findRelease,
	listCoveredStates,
	listCrops,
	listEditions,
	listMeasures,
	listRespondentsBands,
} from "#app/publish/releases.server.ts";
import { AskedQuestions } from "./parts/release/asked-questions.tsx";
import { Codebook } from "./parts/codebook.tsx";
import { ReleaseNotice } from "#app/components/release/release-state.tsx";
import { ReleaseCitation } from "./parts/release/release-citation.tsx";
import { FollowRelease } from "./parts/release/follow-release.tsx";
import { followingOf } from "./parts/release/following.server.ts";
import { Editions } from "./parts/release/release-editions.tsx";
import { ReleaseFacts } from "./parts/release/release-facts.tsx";
import { ReleaseFiles } from "./parts/release/release-files.tsx";
import { TermsOfUse } from "./parts/release/terms-of-use.tsx";
import { previewColumns, type PreviewRow, ReleasePreview } from "./parts/release/release-preview.tsx";

/** Whoever comes to cite or to take a file waits for no scripts: nothing on it needs any. */
export const handle = { bare: true };

const previewRows = 8;

export async function loader({ context, params }: Route.LoaderArgs) {
	const number = ReleaseNumber.safeParse(params.release);
	const release = number.success ? await findRelease(number.data) : undefined;
	if (!release) throw refusal("release_not_found");
	const { releaseId } = release;
	const editions = await listEditions(release.seriesId);
	const previous = editions.find(({ edition }) => edition === release.edition - 1) ?? null;
	const [measures, crops, counties, districts, files, states, bands, changes, preview, asked] = await Promise.all([
		listMeasures(releaseId),
		listCrops(releaseId),
		countCells(releaseId, "county"),
		countCells(releaseId, "district"),
		listFiles(releaseId),
		listCoveredStates(releaseId),
		listRespondentsBands(),
		findChanges(releaseId, previous?.releaseId ?? null),
		listPreview(release),
		findAskedForm(releaseId),
	]);
	const language = getLanguage(context);
	const t = getT(context, "public");
	const places = states.map((state) => t(`common:state.${state}`));
	const told = {
		release,
		measures,
		files,
		places,
		language,
		title: t("data.named", { number: release.number, title: wordsIn(release.title, language), season: release.season }),
		description: t("data.one.description", { season: release.season, places: places.join(", ") }),
		network: t("data.one.network"),
		email: helpContact.email,
		site: env().BASE_URL,
		license: env().DATA_LICENSE_URL ?? null,
		previous: previous && `${env().BASE_URL}/data/${previous.number}`,
	};
	return {
		release,
		editions,
		changes,
		measures,
		crops,
		counties,
		districts,
		files,
		places,
		preview,
		asked,
		following: await followingOf(context, release),
		band: bands[releaseId] ?? null,
		address: `${env().BASE_URL}/data/${release.number}`,
		license: told.license,
		described: release.withdrawn ? [] : [schemaOrgDataset(told), dcatDataset(told)],
	};
}

/** The first rows of the widest areas, in as many columns as a page has room for. */
async function listPreview(release: Release): Promise<PreviewRow[]> {
	const query = { kind: ["region" as const, "state" as const], limit: previewRows };
	const { rows } = await listCellPage(release, query, null);
	return rows.map((row) => Object.fromEntries(previewColumns.map((name) => [name, row[name]])) as PreviewRow);
}

/** What catalogues and search engines read of the release. */
export function meta({ loaderData }: Route.MetaArgs) {
	return (loaderData?.described ?? []).map((record) => ({ "script:ld+json": record }));
}

export default function DataRelease({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("public");
	const { release, measures, crops, address } = loaderData;
	const format = useFormat();
	const title = t("data.named", {
		number: release.number,
		title: wordsIn(release.title, i18n.language),
		season: release.season,
	});
	const year = new Date(release.publishedAt).getUTCFullYear();
	return (
		<Page
			title={title}
			lead={t("data.one.lead", { season: release.season, date: format.dayOf(release.publishedAt) })}
			actions={
				release.withdrawn ? null : (
					<>
						<ButtonLink to={`${href("/map")}?release=${release.number}`}>{t("home.openMap")}</ButtonLink>
						<ButtonLink to={href("/api")} kind="secondary">
							{t("data.api")}
						</ButtonLink>
					</>
				)
			}
		>
			<ReleaseNotice release={release} />
			<Section title={t("data.one.facts")}>
				<ReleaseFacts {...loaderData} />
			</Section>
			{crops.length > 0 && (
				<Section title={t("data.one.crops")}>
					<p>{format.list(crops.map((crop) => t(`common:crop.${crop}`)))}</p>
				</Section>
			)}
			{!release.withdrawn && (
				<>
					<Section title={t("data.files.title")}>
						<ReleaseFiles number={release.number} files={loaderData.files} />
					</Section>
					<Section title={t("data.one.preview")}>
						<ReleasePreview rows={loaderData.preview} />
					</Section>
				</>
			)}
			<Section title={t("dataroom:asked.title")} id="asked">
				<AskedQuestions asked={loaderData.asked} />
			</Section>
			<Codebook measures={measures} />
			{loaderData.editions.length > 1 && (
				<Section title={t("data.one.editions")} id="editions">
					<Editions editions={loaderData.editions} own={release.number} changes={loaderData.changes} />
				</Section>
			)}
			<Section title={t("dataroom:follow.title")} id="follow">
				<FollowRelease {...loaderData} />
			</Section>
			<Section title={t("dataroom:terms.title")} id="terms">
				<TermsOfUse license={loaderData.license} />
			</Section>
			<Section title={t("data.one.cite")}>
				<ReleaseCitation
					number={release.number}
					checksum={release.checksum}
					text={t("data.one.citation", {
						network: t("data.one.network"),
						year,
						title: `${wordsIn(release.title, i18n.language)}, ${release.season}`,
						number: release.number,
						address,
					})}
				/>
				<p className="mt-3">
					<Link to={href("/methods")}>{t("report.toMethods")}</Link>
				</p>
			</Section>
		</Page>
	);
}
