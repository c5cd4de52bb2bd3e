import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Route } from "./+types/log";
import { listLogChoices } from "#app/auth/event-filter.server.ts";
import { type LoggedEvent, listEvents } from "#app/auth/event-list.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { logFilters, LogQuery } from "#app/auth/log-query.ts";
import { readNetworkClock } from "#app/auth/network-clock.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { KeyPaging } from "#app/components/key-paging.tsx";
import { Page } from "#app/components/page.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { eventWords } from "./parts/log/event-words.ts";
import { LogFilters } from "./parts/log/log-filters.tsx";

export async function loader({ context, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const query = LogQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	return network.transaction(async (trx) => ({
		...(await listEvents(trx, network.viewer, query)),
		...(await listLogChoices(trx, network.viewer)),
		timeZone: (await readNetworkClock(trx)).timeZone,
		query,
	}));
}

/** Who did what, newest first; never what a grower answered. */
export default function Log({ loaderData }: Route.ComponentProps) {
	const { rows, people, surveys, timeZone, query, total, moreThanTotal, ...beside } = loaderData;
	const { t, i18n } = useTranslation("network");
	const format = useFormat();
	const said = (event: LoggedEvent) => eventWords(event, { t, format, language: i18n.language, timeZone });
	const filters = logFilters(query);
	const count = { count: total, value: format.number(total) };
	return (
		<Page
			title={t("log.title")}
			lead={t("log.lead")}
			actions={
				<ButtonLink to={`${href("/network/log.csv")}?${filters}`} kind="secondary" reloadDocument>
					{t("log.download")}
				</ButtonLink>
			}
		>
			<LogFilters key={filters.toString()} query={query} people={people} surveys={surveys} />
			<DataTable
				caption={t("log.title")}
				captionHidden
				rows={rows}
				rowKey={(event) => String(event.eventId)}
				columns={[
					{ key: "when", header: t("log.when"), cell: (event) => format.moment(event.happenedAt, timeZone) },
					{
						key: "who",
						header: t("log.who"),
						cell: (event) => <Who who={said(event).who} nobody={said(event).nobody} email={event.person?.email} />,
					},
					{ key: "what", header: t("log.what"), cell: (event) => said(event).what },
					{ key: "about", header: t("log.about"), cell: (event) => <Lines lines={said(event).about} /> },
				]}
				empty={<EmptyState title={t("log.emptyTitle")}>{t("log.emptyBody")}</EmptyState>}
			/>
			<KeyPaging
				{...beside}
				total={total}
				words={{
					total: t(moreThanTotal ? "log.moreThan" : "log.total", count),
					before: t("log.newer"),
					after: t("log.older"),
				}}
			/>
		</Page>
	);
}

function Who({ who, nobody, email }: { who: string; nobody: boolean; email: string | null | undefined }) {
	if (nobody) return <span className="text-quiet">{who}</span>;
	return (
		<>
			{who}
			<span className="block text-xs text-quiet">{email}</span>
		</>
	);
}

function Lines({ lines }: { lines: string[] }) {
	return lines.map((line) => (
		<span key={line} className="block">
			{line}
		</span>
	));
}
