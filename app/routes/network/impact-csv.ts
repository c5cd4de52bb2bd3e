import type { Route } from "./+types/impact-csv";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { readNetworkClock } from "#app/auth/network-clock.server.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { readImpact } from "#app/jobs/impact.server.ts";
import { impactKeys, impactNowKeys } from "#app/jobs/impact.ts";
import { toCsv } from "#app/publish/data-file.ts";

const columns = ["season", "as_of", "number", "value", "unit", "name", "counts"] as const;

/** What the network reached as a file: a line a number, with what it counts. Those of today have no season. */
export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const { seasons, now, today } = await network.transaction(async (trx) => ({
		...(await readImpact(trx, network.viewer)),
		...(await readNetworkClock(trx)),
	}));
	const t = getT(context, "network");
	const line = (
		season: number | null,
		key: (typeof impactKeys | typeof impactNowKeys)[number],
		value: number | null,
	) => [
		season,
		today,
		key,
		key === "responseRate" && value !== null ? Number(value.toFixed(1)) : value,
		key === "responseRate" ? "percent" : "count",
		t(`impact.of.${key}.name`),
		t(`impact.of.${key}.counts`),
	];
	const rows = [
		...seasons.flatMap((season) => impactKeys.map((key) => line(season.season, key, season[key]))),
		...impactNowKeys.map((key) => line(null, key, now[key])),
	];
	return new Response(toCsv(columns, rows), {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": `attachment; filename="impact-${today}.csv"`,
			"content-language": getLanguage(context),
			"cache-control": "no-store",
		},
	});
}
