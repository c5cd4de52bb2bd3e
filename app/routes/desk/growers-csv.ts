import { href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/growers-csv";
import { logEvent } from "#app/auth/event-log.server.ts";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { fileHeader, listFileRows } from "#app/directory/grower-file.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { toCsv } from "#app/publish/data-file.ts";
import { listChosen, readChoice } from "./parts/growers/chosen.server.ts";

/** Personal data leave by a button's press alone: an address that is only opened tells first what the file holds. */
export function loader({ context, request }: Route.LoaderArgs) {
	requireAssociate(context);
	return redirect(confirmAddress(request.url), 303);
}

const confirmAddress = (url: string) => `${href("/desk/growers/export")}${new URL(url).search}`;

/** The chosen growers with their plantings as a file, which can be changed and read in again. That it was taken is logged. */
export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(z.object({ mark: z.string() }), await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const choice = readChoice(request.url);
	const rows = await desk.transaction(async (trx) => {
		const chosen = await listChosen(trx, desk.viewer, choice);
		if (chosen.mark !== form.value.mark) return undefined;
		await logEvent(trx, {
			personId: desk.viewer.personId,
			action: "operation.exported",
			subjectKind: "operation",
			subjectId: "several",
			detail: { growers: chosen.rows.length },
		});
		return listFileRows(trx, chosen.rows);
	});
	if (!rows) {
		context.get(sessionContext).flash("toast", { key: "growers:export.changed" });
		return redirect(confirmAddress(request.url), 303);
	}
	return new Response(toCsv(fileHeader, rows), {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": 'attachment; filename="growers.csv"',
			"content-language": "en",
			"cache-control": "no-store",
		},
	});
}
