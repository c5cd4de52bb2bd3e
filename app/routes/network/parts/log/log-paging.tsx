import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { LogPage } from "#app/auth/event-list.server.ts";
import { type LogQuery, logFilters } from "#app/auth/log-query.ts";
import { useFormat } from "#app/i18n/use-format.ts";

type LogPagingProps = Omit<LogPage, "rows"> & { query: LogQuery };

/** The pages beside this one, each from an event on: what is logged meanwhile moves none of them. */
export function LogPaging({ older, newer, total, moreThanTotal, query }: LogPagingProps) {
	const { t } = useTranslation("network");
	const format = useFormat();
	const count = { count: total, value: format.number(total) };
	const beside = (name: "older" | "newer", eventId: number) => {
		const search = logFilters(query);
		search.set(name, String(eventId));
		return `${href("/network/log")}?${search}`;
	};
	return (
		<nav
			aria-label={t("common:paging.label")}
			className="mt-3 flex flex-wrap items-center justify-between gap-3 text-sm"
		>
			<p className="text-quiet">{moreThanTotal ? t("log.moreThan", count) : t("log.total", count)}</p>
			<ul className="flex gap-4">
				{newer !== null && (
					<li>
						<Link rel="prev" to={beside("newer", newer)} className="inline-flex min-h-11 items-center">
							← {t("log.newer")}
						</Link>
					</li>
				)}
				{older !== null && (
					<li>
						<Link rel="next" to={beside("older", older)} className="inline-flex min-h-11 items-center">
							{t("log.older")} →
						</Link>
					</li>
				)}
			</ul>
		</nav>
	);
}
