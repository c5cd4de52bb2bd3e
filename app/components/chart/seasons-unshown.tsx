import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { SeasonCell } from "#app/publish/report-source.server.ts";
import { unshownSeasons } from "./unshown-seasons.ts";

/** Which seasons have no dot, and why, so that a gap in the line is not taken for a season like the others. */
export function SeasonsUnshown({ rows }: { rows: SeasonCell[] }) {
	const { t } = useTranslation("report");
	const format = useFormat();
	const byReason = groupBy(unshownSeasons(rows), ({ why }) => why);
	return [...byReason].map(([why, seasons]) => (
		<p key={why} className="mb-3 max-w-prose text-sm">
			{t(`chart.unshown.${why}`, {
				count: seasons.length,
				seasons: format.list(seasons.map(({ season }) => `${season}`)),
			})}
		</p>
	));
}
