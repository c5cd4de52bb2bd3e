import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/data-release";
import { ButtonLink } from "#app/components/button.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { env } from "#app/lib/env.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { countCells, findRelease, listCrops, listEditions, listMeasures } from "#app/publish/releases.server.ts";
import type { Release } from "#app/publish/release.ts";
import { Codebook } from "./parts/codebook.tsx";
import { ReleaseNotice, ReleaseState } from "./parts/release-state.tsx";

const Number = z.coerce.number().int().positive().max(2_147_483_647);

export async function loader({ params }: Route.LoaderArgs) {
	const number = Number.safeParse(params.release);
	const release = number.success ? await findRelease(number.data) : undefined;
	if (!release) throw refusal("release_not_found");
	const [editions, measures, crops, counties, districts] = await Promise.all([
		listEditions(release.seriesId),
		listMeasures(release.releaseId),
		listCrops(release.releaseId),
		countCells(release.releaseId, "county"),
		countCells(release.releaseId, "district"),
	]);
	return {
		release,
		editions,
		measures,
		crops,
		counties,
		districts,
		address: `${env().BASE_URL}/data/${release.number}`,
	};
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
						<ButtonLink to={href("/dataroom")} kind="secondary">
							{t("data.files.link")}
						</ButtonLink>
					</>
				)
			}
		>
			<ReleaseNotice release={release} />
			<Section title={t("data.one.facts")}>
				<Facts data={loaderData} />
			</Section>
			{crops.length > 0 && (
				<Section title={t("data.one.crops")}>
					<p>{format.list(crops.map((crop) => t(`common:crop.${crop}`)))}</p>
				</Section>
			)}
			<Codebook measures={measures} />
			{loaderData.editions.length > 1 && (
				<Section title={t("data.one.editions")}>
					<Editions editions={loaderData.editions} own={release.number} />
				</Section>
			)}
			<Section title={t("data.one.cite")}>
				<p className="max-w-prose border-l-4 border-damson bg-damson-wash px-5 py-4">
					{t("data.one.citation", {
						network: t("data.one.network"),
						year,
						title: wordsIn(release.title, i18n.language),
						number: release.number,
						address,
					})}
				</p>
				<p className="mt-3 max-w-prose text-sm text-quiet">{t("data.one.frozen", { checksum: release.checksum })}</p>
				<p className="mt-3">
					<Link to={href("/methods")}>{t("report.toMethods")}</Link>
				</p>
			</Section>
		</Page>
	);
}

function Editions({ editions, own }: { editions: Release[]; own: number }) {
	const { t } = useTranslation("public");
	const format = useFormat();
	return (
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
	);
}

function Facts({ data: { release, counties, districts } }: { data: Route.ComponentProps["loaderData"] }) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const { rules, method } = release;
	const percent = (fraction: number) => format.quantity(fraction * 100, "percent");
	const counted = (counts: typeof counties) =>
		t("data.one.counted", {
			shown: format.number(counts.shown),
			withheld: format.number(counts.withheld),
			noGrowers: format.number(counts.no_growers),
		});
	const items = [
		{ term: t("data.published"), detail: format.moment(release.publishedAt) },
		method.openedAt &&
			method.closedAt && {
				term: t("data.one.asked"),
				detail: t("data.one.askedFromTo", { from: format.dayOf(method.openedAt), to: format.dayOf(method.closedAt) }),
			},
		method.all && {
			term: t("data.answered"),
			detail: t("data.one.answeredOf", {
				answered: format.number(method.all.answered),
				asked: format.number(method.all.asked),
			}),
		},
		...(method.states ?? []).map(({ stateFips, asked, answered }) => ({
			term: t("data.one.answeredIn", { state: t(`common:state.${stateFips}`) }),
			detail: t("data.one.answeredOf", { answered: format.number(answered), asked: format.number(asked) }),
		})),
		!release.withdrawn && { term: t("data.one.countyCells"), detail: counted(counties) },
		!release.withdrawn && { term: t("data.one.districtCells"), detail: counted(districts) },
		rules.minimumOwners && {
			term: t("data.one.minimum"),
			detail: t("data.one.minimumOwners", { count: rules.minimumOwners, value: format.number(rules.minimumOwners) }),
		},
		rules.dominancePercent && {
			term: t("data.one.dominance"),
			detail: t("data.one.dominanceRule", { percent: format.quantity(rules.dominancePercent, "percent") }),
		},
		rules.steadyCv &&
			rules.careCv && {
				term: t("data.one.cutOffs"),
				detail: t("data.one.cutOffsRule", { steady: percent(rules.steadyCv), care: percent(rules.careCv) }),
			},
		rules.steadyDays &&
			rules.careDays && {
				term: t("data.one.dayCutOffs"),
				detail: t("data.one.dayCutOffsRule", {
					steady: format.quantity(rules.steadyDays, "days"),
					care: format.quantity(rules.careDays, "days"),
				}),
			},
		{ term: t("data.one.codeVersion"), detail: release.codeVersion },
	];
	return <DescriptionList items={items.filter((item) => typeof item === "object")} />;
}
