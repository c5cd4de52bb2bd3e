import { createHash } from "node:crypto";
import type { DraftCell, ReleaseMethod } from "./draft.ts";
import { publishedRows } from "./published-rows.ts";

/** SHA-256 over the whole of a draft's cells in a fixed order: what was audited is what is approved. It stays at the desk. */
export function draftChecksum(cells: readonly DraftCell[]): string {
	return sumOf(
		cells.map(({ cropKey, areaKey, status, respondents, figures }) => [
			cropKey,
			areaKey,
			status,
			respondents,
			figures?.map(plain) ?? null,
		]),
	);
}

/**
 * SHA-256 over what everybody sees of a draft once it is published, in a fixed order. The whole draft's sum is not told: it
 * is made of exact counts and unrounded figures, and so could prove a guess at them right.
 */
export function publishedChecksum(method: Pick<ReleaseMethod, "measures">, cells: readonly DraftCell[]): string {
	const { cellRows, figureRows } = publishedRows(method, cells);
	return sumOf([...cellRows, ...figureRows].map(plain));
}

type Audited = { checksum: string | null; published_checksum: string | null };

/** Whether a draft's cells are still those that were audited: in whole, and as they would be published. */
export function isAsAudited(draft: Audited, method: ReleaseMethod, cells: readonly DraftCell[]): boolean {
	return draftChecksum(cells) === draft.checksum && publishedChecksum(method, cells) === draft.published_checksum;
}

function sumOf(rows: readonly unknown[]): string {
	const ordered = rows.map((row) => JSON.stringify(row)).toSorted();
	return createHash("sha256").update(ordered.join("\n")).digest("hex");
}

// jsonb gives an object's keys back in an order of its own.
function plain(row: object): unknown[] {
	return Object.entries(row).toSorted(([a], [b]) => (a < b ? -1 : 1));
}
