import type { Route } from "./+types/growers-csv";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { fileHeader, listFileRows } from "#app/directory/grower-file.server.ts";
import { toCsv } from "#app/publish/data-file.ts";
import { listChosen, readChoice } from "./parts/growers/chosen.server.ts";

/** The chosen growers with their plantings as a file, which can be changed and read in again. That it was taken is logged. */
export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const choice = readChoice(request.url);
	const rows = await desk.transaction(async (trx) => {
		const chosen = await listChosen(trx, desk.viewer, choice);
		await logEvent(trx, {
			personId: desk.viewer.personId,
			action: "operation.exported",
			subjectKind: "operation",
			subjectId: "several",
			detail: { growers: chosen.rows.length },
		});
		return listFileRows(trx, chosen.rows);
	});
	return new Response(toCsv(fileHeader, rows), {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": 'attachment; filename="growers.csv"',
			"content-language": "en",
			"cache-control": "no-store",
		},
	});
}
