import type { Trx } from "#app/auth/scope.server.ts";
import { textOf } from "#app/directory/import/cells.ts";
import { guessColumns } from "#app/directory/import/columns.ts";
import { readRows } from "#app/directory/import/import-rows.server.ts";
import type { Import } from "#app/directory/import/imports.server.ts";

export type ColumnSample = { heading: string; sample: string };

/** The columns of a file with what stands in the first filled row of each, and which seems to hold what. */
export async function sampleColumns(trx: Trx, { importId, header }: Import) {
	const rows = (await readRows(trx, importId)).slice(0, 20);
	const samples = (header ?? []).map((heading, index): ColumnSample => {
		const first = rows.map(({ cells }) => textOf(cells[index])).find((text) => text !== "") ?? "";
		return { heading: heading.slice(0, 40), sample: first.slice(0, 30) };
	});
	return { samples, guessed: guessColumns(header ?? []) };
}
