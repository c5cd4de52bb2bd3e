import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Route } from "./+types/impact";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { readNetworkClock } from "#app/auth/network-clock.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { DescriptionList } from "#app/components/description-list.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { readImpact } from "#app/jobs/impact.server.ts";
import { impactKeys, type ImpactKey, impactNowKeys, type SeasonImpact } from "#app/jobs/impact.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return network.transaction(async (trx) => ({
		...(await readImpact(trx, network.viewer)),
		...(await readNetworkClock(trx)),
	}));
}

/** What the network reached, for those who pay for it: sums, each with what it counts. */
export default function ImpactPage({ loaderData }: Route.ComponentProps) {
	const { seasons, now, today } = loaderData;
	const { t } = useTranslation("network");
	const format = useFormat();
	return (
		<Page
			title={t("impact.title")}
			lead={t("impact.lead", { day: format.day(today) })}
			actions={
				<ButtonLink to={href("/network/impact.csv")} kind="secondary" reloadDocument>
					{t("impact.download")}
				</ButtonLink>
			}
		>
			<Section title={t("impact.bySeason")}>
				<Seasons seasons={seasons} />
			</Section>
			<Section title={t("impact.now")}>
				<DescriptionList
					items={impactNowKeys.map((key) => ({
						term: t(`impact.of.${key}.name`),
						detail: (
							<>
								<span className="block text-lg font-bold">{format.number(now[key])}</span>
								{t(`impact.of.${key}.counts`)}
							</>
						),
					}))}
				/>
			</Section>
			<p className="mt-6 max-w-prose text-sm text-quiet">
				{now.readsSince ? t("impact.since", { day: format.day(now.readsSince) }) : t("impact.noReads")}
				{now.filesSince && ` ${t("impact.filesSince", { day: format.day(now.filesSince) })}`}
			</p>
		</Page>
	);
}

/** A row a number, with what it counts beside its name; a column a season. */
function Seasons({ seasons }: { seasons: SeasonImpact[] }) {
	const { t } = useTranslation("network");
	const told = useToldImpact();
	if (seasons.length === 0) return <EmptyState title={t("impact.emptyTitle")}>{t("impact.emptyBody")}</EmptyState>;
	return (
		<DataTable
			caption={t("impact.bySeason")}
			captionHidden
			rows={[...impactKeys]}
			rowKey={(key) => key}
			columns={[
				{
					key: "name",
					header: t("impact.what"),
					cell: (key) => (
						<>
							<span className="font-bold">{t(`impact.of.${key}.name`)}</span>
							<span className="block max-w-prose text-quiet">{t(`impact.of.${key}.counts`)}</span>
						</>
					),
				},
				...seasons.map((season) => ({
					key: String(season.season),
					header: String(season.season),
					numeric: true,
					cell: (key: ImpactKey) => told(key, season[key]),
				})),
			]}
		/>
	);
}

function useToldImpact() {
	const { t } = useTranslation("network");
	const format = useFormat();
	return (key: ImpactKey, value: number | null) => {
		if (value === null) return t("impact.nothing");
		return key === "responseRate" ? format.quantity(value, "percent", 1) : format.number(value);
	};
}
