import { useTranslation } from "react-i18next";
import type { Route } from "./+types/log";
import { type LoggedEvent, listEvents } from "#app/auth/event-list.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { LogQuery, logSubjects } from "#app/auth/log-actions.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Paging } from "#app/components/paging.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";

export async function loader({ context, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const query = LogQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	return { ...(await network.transaction((trx) => listEvents(trx, network.viewer, query))), query };
}

/** Who did what, newest first; never what a grower answered. */
export default function Log({ loaderData }: Route.ComponentProps) {
	const { rows, total, page, pageCount, query } = loaderData;
	const { t } = useTranslation("network");
	const format = useFormat();
	return (
		<Page title={t("log.title")} lead={t("log.lead")}>
			<SearchBar label={t("log.search")} defaultValue={query.q}>
				<ChoiceField
					kind="select"
					name="show"
					legend={t("log.show")}
					defaultValue={query.show}
					options={(["all", ...logSubjects] as const).map((subject) => ({
						value: subject,
						label: t(`log.filter.${subject}`),
					}))}
				/>
			</SearchBar>
			<DataTable
				caption={t("log.title")}
				captionHidden
				rows={rows}
				rowKey={(event) => String(event.eventId)}
				columns={[
					{ key: "when", header: t("log.when"), cell: (event) => format.moment(event.happenedAt) },
					{ key: "who", header: t("log.who"), cell: (event) => <Who event={event} /> },
					{ key: "what", header: t("log.what"), cell: (event) => <What action={event.action} /> },
					{ key: "about", header: t("log.about"), cell: (event) => <About event={event} /> },
				]}
				empty={<EmptyState title={t("log.emptyTitle")}>{t("log.emptyBody")}</EmptyState>}
			/>
			<Paging page={page} pageCount={pageCount} total={total} />
		</Page>
	);
}

function Who({ event: { person, told, action } }: { event: LoggedEvent }) {
	const { t } = useTranslation("network");
	// Whoever leaves is not named, not even in the log of it.
	if (!person && (action === "operation.left" || action === "response.withdrawn")) return t("log.forgotten");
	if (!person) return <span className="text-quiet">{t(told.byLink ? "log.byLink" : "log.nobody")}</span>;
	return (
		<>
			{person.name || t("log.forgotten")}
			<span className="block text-xs text-quiet">{person.email}</span>
		</>
	);
}

function What({ action }: { action: string }) {
	const { t } = useTranslation("network");
	const [subject, verb] = action.split(".");
	// A row that an earlier version of the product wrote may have no words any more.
	return t(`log.action.${subject}.${verb}`, { defaultValue: action });
}

/** Whom or what it was about, a line each. Growers are told by state: who answered is the desk's to see. */
function About({ event }: { event: LoggedEvent }) {
	const { t, i18n } = useTranslation("network");
	const format = useFormat();
	const { about, person, survey, stateFips, told, action } = event;
	const state = stateFips && t(`common:state.${stateFips}`);
	const role = told.role && t(`common:role.${told.role}`);
	const ofGrower = /^(response|operation)\./.test(action) || action === "survey.link_replaced";
	const lines = [
		about !== person?.name && about !== "" && about,
		role && (state ? t("people.roleIn", { role, state }) : role),
		survey && t("log.survey", { title: wordsIn(survey.title, i18n.language), season: survey.season }),
		ofGrower && state && t("log.grower", { state }),
		told.number !== undefined && t("log.release", { number: told.number }),
		told.slug,
		told.operations !== undefined && t("log.operations", count(told.operations)),
		told.queued !== undefined && t("log.queued", count(told.queued)),
		told.growers !== undefined && t("log.growers", count(told.growers)),
		told.to && t("log.to", { moment: format.moment(told.to) }),
	].filter((line) => typeof line === "string");
	return lines.map((line) => (
		<span key={line} className="block">
			{line}
		</span>
	));

	function count(value: number) {
		return { count: value, value: format.number(value) };
	}
}
