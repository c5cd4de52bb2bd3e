import { sql } from "kysely";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { log } from "#app/lib/log.server.ts";
import { protect, type Protection, type ProtectionTable, type ProtectOptions } from "#app/protect/protect.ts";
import { protectInThread } from "#app/protect/protect-thread.server.ts";
import { guardRevision } from "#app/protect/revision.ts";
import { sharedCells } from "#app/protect/shared-cells.ts";
import { surveyTable } from "#app/protect/survey-table.ts";
import { draftChecksum, publishedChecksum } from "#app/release/checksums.server.ts";
import { type DraftCell, ReleaseAudit, type ReleaseMethod } from "#app/release/draft.ts";
import { assembleCells } from "./assemble-cells.ts";
import { keepBasis } from "./draft-basis.server.ts";
import { type DraftInputs, readInputs } from "./draft-inputs.server.ts";
import { DraftNotWanted, gapOf, watchDraft } from "./draft-watch.server.ts";

/** Cells with answers that a table may have to be protected without a thread of its own. */
const FEW_CELLS = 40;

/**
 * Makes a draft's cells: tally, estimate, protect, audit. Reading and writing are two short transactions, with the long
 * computation between them; a draft that was superseded meanwhile is left as it is.
 * @param transact runs both; the demo's data passes one that stays in a transaction of its own.
 */
export async function computeReleaseDraft(
	{ releaseDraftId }: { releaseDraftId: string },
	transact: typeof scopedTransaction = scopedTransaction,
): Promise<void> {
	const inputs = await transact({ kind: "network" }, (trx) => readInputs(trx, releaseDraftId), "repeatable read");
	if (!inputs) return;
	const { method, shares } = inputs;
	const started = performance.now();
	const table = surveyTable({
		areas: treeOf(method.areas),
		cropKeys: method.cropKeys,
		shares,
		baseKeys: inputs.baseKeys,
		sensitiveKeys: inputs.sensitive.counted,
		holdings: inputs.holdings,
	});
	const protection = await protectWatched(releaseDraftId, table, inputs, transact);
	if (!protection) return;
	const seconds = (performance.now() - started) / 1000;
	const { estimates, joins, calibrations } = inputs.weighed;
	const cells = assembleCells({ method, frameCells: inputs.frameCells, shares, protection, estimates });
	const audit = ReleaseAudit.parse({
		...protection.audit,
		byQuantity: protection.audit.byQuantity.map((one) => ({
			...one,
			label: inputs.quantityLabels.get(one.quantity),
		})),
		seconds,
		heldAgainst: inputs.heldAgainst,
		gap: protection.loss && gapOf(protection.loss),
	});
	await transact({ kind: "network" }, async (trx) => {
		const written = await writeDraft(trx, releaseDraftId, { ...method, joins, calibrations }, audit, cells);
		if (written) await keepBasis(trx, releaseDraftId, inputs.holdings);
	});
	log.info({ releaseDraftId, cells: cells.length, passed: audit.passed, seconds }, "release drafted");
}

/** undefined when nobody waits for the draft any more. */
async function protectWatched(
	releaseDraftId: string,
	table: ProtectionTable,
	inputs: DraftInputs,
	transact: typeof scopedTransaction,
): Promise<Protection | undefined> {
	const { rules, shares } = inputs;
	const options = whatIsPublic(table, inputs);
	// Such a table is done before a thread of its own would have begun.
	if (shares.length <= FEW_CELLS) return protect(table, rules, options);
	await using watch = watchDraft(releaseDraftId, transact);
	try {
		return await protectInThread(table, rules, options, watch);
	} catch (error) {
		if (!(error instanceof DraftNotWanted)) throw error;
		log.info({ releaseDraftId }, "release draft not wanted any more");
		return undefined;
	}
}

/** What the releases before tell, and those of other surveys of the season, which this one is held against. */
function whatIsPublic(table: ProtectionTable, inputs: DraftInputs): ProtectOptions {
	const { rules, method, earlier, others, holdings } = inputs;
	const areas = treeOf(method.areas);
	const quantities = table.quantities.map(({ key }) => key);
	return {
		...(earlier.length > 0 && {
			guard: guardRevision({ areas, quantities, rules, earlier, holdings }),
			revision: { areas, cropKeys: method.cropKeys, earlier, holdings },
		}),
		...(others.length > 0 && { shared: sharedCells({ areas, rules, holdings, others }) }),
	};
}

function treeOf(areas: ReleaseMethod["areas"]): { areaKey: string; parentKey: string }[] {
	return areas.flatMap(({ areaKey, parentKey }) => (parentKey === null ? [] : [{ areaKey, parentKey }]));
}

async function writeDraft(
	trx: Trx,
	releaseDraftId: string,
	method: ReleaseMethod,
	audit: ReleaseAudit,
	cells: DraftCell[],
): Promise<boolean> {
	const draft = await trx
		.updateTable("collect.release_draft")
		.set({
			status: audit.passed ? "audited" : "audit_failed",
			method: JSON.stringify(method),
			audit: JSON.stringify(audit),
			checksum: draftChecksum(cells),
			published_checksum: publishedChecksum(method, cells),
			computed_at: new Date(),
		})
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "in", ["queued", "failed"])
		.returning("release_draft_id")
		.executeTakeFirst();
	if (!draft) return false;
	const rows = cells.map((cell) => ({
		crop_key: cell.cropKey,
		area_key: cell.areaKey,
		status: cell.status,
		reasons: cell.reasons,
		respondents: cell.respondents,
		figures: cell.figures,
	}));
	await sql`insert into collect.release_draft_cell (release_draft_id, crop_key, area_key, status, reasons, respondents, figures)
		select ${releaseDraftId}::uuid, crop_key, area_key, status, array(select jsonb_array_elements_text(reasons)), respondents,
			nullif(figures, 'null'::jsonb)
		from jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
		as c(crop_key text, area_key text, status text, reasons jsonb, respondents int, figures jsonb)`.execute(trx);
	return true;
}
