import { href, redirect } from "react-router";
import type { Route } from "./+types/log-csv";
import { listAllEvents } from "#app/auth/event-list.server.ts";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { logFilters, LogQuery } from "#app/auth/log-query.ts";
import { readNetworkClock } from "#app/auth/network-clock.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { toCsv } from "#app/publish/data-file.ts";
import { eventWords } from "./parts/log/event-words.ts";

/** As many events as one file takes. Whoever needs more takes them by days. */
const most = 50_000;
const columns = [
	...(["event", "happened_at", "on_the_networks_clock", "person", "email", "action"] as const),
	...(["what", "about", "state"] as const),
];

/** The events of the filters in the address as a file, in the reader's language. That it was taken is logged. */
export async function loader({ context, request }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const query = LogQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const taken = await network.transaction(async (trx) => {
		const events = await listAllEvents(trx, network.viewer, query, most);
		if (!events) return undefined;
		await logEvent(trx, {
			personId: network.viewer.personId,
			action: "log.exported",
			subjectKind: "log",
			subjectId: "several",
			detail: { events: events.length, filters: logFilters(query).toString() },
		});
		return { events, timeZone: (await readNetworkClock(trx)).timeZone };
	});
	if (!taken) {
		context.get(sessionContext).flash("toast", { key: "network:log.tooMany", tone: "attention" });
		throw redirect(`${href("/network/log")}?${logFilters(query)}`, 303);
	}
	const language = getLanguage(context);
	const t = getT(context, "network");
	const format = formatterFor(language, t);
	const rows = taken.events.map((event) => {
		const { who, what, about } = eventWords(event, { t, format, language, timeZone: taken.timeZone });
		const when = [event.happenedAt.toISOString(), format.moment(event.happenedAt, taken.timeZone)];
		const state = event.stateFips ? t(`common:state.${event.stateFips}`) : "";
		return [event.eventId, ...when, who, event.person?.email ?? "", event.action, what, about.join("; "), state];
	});
	return new Response(toCsv(columns, rows), {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": 'attachment; filename="log.csv"',
			"content-language": language,
			"cache-control": "no-store",
		},
	});
}
