import type { Route } from "./+types/growers-import-csv";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { problemText } from "#app/components/problem-text.ts";
import { textOf } from "#app/directory/import/cells.ts";
import { listBadRows } from "#app/directory/import/import-rows.server.ts";
import { findImport } from "#app/directory/import/imports.server.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { toCsv } from "#app/publish/data-file.ts";

/** The rows of a file that are to be mended, under its own header, with what to mend in a last column. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const file = await findImport(trx, desk.viewer, params.importId);
		return file && { header: file.header ?? [], rows: await listBadRows(trx, file.importId) };
	});
	if (!found) throw refusal("import_not_found");
	const { header, rows } = found;
	const language = getLanguage(context);
	const common = getT(context, "common");
	const t = getT(context, "growers");
	const words = problemText(common, language, formatterFor(language, common));
	const csv = toCsv(
		[...header, t("import.toMend")],
		rows.map(({ cells, problems }) => [
			...header.map((_, index) => textOf(cells?.[index])),
			// A line each in the one cell, since some end in a question mark.
			problems.map((problem) => words(problem, t(`import.field.${problem.field}`))).join("\n"),
		]),
	);
	return new Response(`\uFEFF${csv}`, {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": 'attachment; filename="to-mend.csv"',
			"content-language": language,
			"cache-control": "no-store",
		},
	});
}
