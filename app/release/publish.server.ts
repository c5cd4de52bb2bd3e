import { createHash } from "node:crypto";
import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import {
	type DraftCell,
	publishedFigure,
	ReleaseAudit,
	ReleaseMethod,
	ReleaseRules,
	respondentsBand,
} from "./draft.ts";
import { listDraftCells } from "./drafts.server.ts";

export type Published = { outcome: "published"; releaseId: string; number: number };
export type NotPublished = { outcome: "not_found" | "not_waiting" | "own_draft" | "changed" };

/**
 * Publishes an audited draft as a numbered release, in the caller's transaction: all of it or nothing. Only what may be
 * shown is copied; a withheld cell becomes one word. The approver is another person than the drafter, and the draft's
 * cells must still be those that were audited.
 */
export async function publishRelease(
	trx: Trx,
	viewer: Coordinator,
	releaseDraftId: string,
	codeVersion: string,
	publishedAt: Date = new Date(),
): Promise<Published | NotPublished> {
	const draft = await trx
		.selectFrom("collect.release_draft")
		.selectAll()
		.where("release_draft_id", "=", releaseDraftId)
		.forUpdate()
		.executeTakeFirst();
	if (!draft) return { outcome: "not_found" };
	if (draft.status !== "audited") return { outcome: "not_waiting" };
	if (draft.drafted_by === viewer.personId) return { outcome: "own_draft" };
	const audit = ReleaseAudit.parse(draft.audit);
	const cells = await listDraftCells(trx, releaseDraftId);
	if (!audit.passed || draftChecksum(cells) !== draft.checksum) return { outcome: "changed" };

	const releaseId = releaseDraftId; // one release a draft: trying twice meets the key
	const method = ReleaseMethod.parse(draft.method);
	const number = await insertRelease(trx, releaseId, {
		method,
		audit,
		rules: ReleaseRules.parse(draft.rules),
		cells,
		codeVersion,
		publishedAt,
	});
	await insertCells(trx, releaseId, method, cells);
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "approved", decided_by: viewer.personId, decided_at: publishedAt, release_id: releaseId })
		.where("release_draft_id", "=", releaseDraftId)
		.execute();
	return { outcome: "published", releaseId, number };
}

/** SHA-256 over the cells in a fixed order: what was audited is what is approved. */
export function draftChecksum(cells: readonly DraftCell[]): string {
	const ordered = cells
		.map(({ cropKey, areaKey, status, respondents, figures }) => [
			cropKey,
			areaKey,
			status,
			respondents,
			figures?.map(plain) ?? null,
		])
		.map((cell) => JSON.stringify(cell))
		.toSorted();
	return createHash("sha256").update(ordered.join("\n")).digest("hex");
}

// jsonb gives an object's keys back in an order of its own.
function plain(figure: object): unknown[] {
	return Object.entries(figure).toSorted(([a], [b]) => (a < b ? -1 : 1));
}

async function insertRelease(
	trx: Trx,
	releaseId: string,
	made: {
		method: ReleaseMethod;
		audit: ReleaseAudit;
		rules: ReleaseRules;
		cells: DraftCell[];
		codeVersion: string;
		publishedAt: Date;
	},
): Promise<number> {
	const { method, audit, rules, cells, codeVersion, publishedAt } = made;
	const { measures, areas, ...told } = method;
	const row = await trx
		.insertInto("release.release")
		.values({
			release_id: releaseId,
			season: method.season,
			form_key: method.formKey,
			title: JSON.stringify(method.title),
			published_at: publishedAt,
			rules: JSON.stringify(rules),
			method: JSON.stringify(told),
			audit: JSON.stringify({ ...audit, failures: undefined }),
			code_version: codeVersion,
			checksum: draftChecksum(cells),
		})
		.returning("number")
		.executeTakeFirstOrThrow();
	await trx
		.insertInto("release.area")
		.values(
			areas.map((area) => ({
				release_id: releaseId,
				area_key: area.areaKey,
				kind: area.kind,
				parent_key: area.parentKey,
				state_fips: area.stateFips,
				name: area.name,
			})),
		)
		.execute();
	await trx
		.insertInto("release.measure")
		.values(
			measures.map((measure, position) => ({
				release_id: releaseId,
				measure_key: measure.key,
				position,
				label: JSON.stringify(measure.label),
				description: JSON.stringify(measure.description),
				kind: measure.kind,
				unit: measure.unit,
				decimals: measure.decimals,
				worse: measure.worse,
				hue: measure.hue,
			})),
		)
		.execute();
	return row.number;
}

async function insertCells(trx: Trx, releaseId: string, method: ReleaseMethod, cells: DraftCell[]): Promise<void> {
	const decimalsOf = new Map(method.measures.map((measure) => [measure.key, measure.decimals]));
	const cellRows = cells.map((cell) => ({
		crop_key: cell.cropKey,
		area_key: cell.areaKey,
		status: cell.status,
		respondents_band: cell.respondents === null ? null : respondentsBand(cell.respondents),
	}));
	const figureRows = cells.flatMap((cell) =>
		(cell.figures ?? []).map((drafted) => {
			const figure = publishedFigure(drafted, decimalsOf.get(drafted.measureKey) ?? 0);
			return {
				measure_key: figure.measureKey,
				crop_key: cell.cropKey,
				area_key: cell.areaKey,
				value: figure.value,
				standard_error: figure.standardError,
				cv: figure.cv,
				lower_bound: figure.lower,
				upper_bound: figure.upper,
				steadiness: figure.steadiness,
				first_quartile: figure.quartiles?.first ?? null,
				third_quartile: figure.quartiles?.third ?? null,
			};
		}),
	);
	// One parameter a table: thousands of rows stay under the protocol's limit of bound values.
	await sql`insert into release.cell (release_id, crop_key, area_key, status, respondents_band)
		select ${releaseId}::uuid, * from jsonb_to_recordset(${JSON.stringify(cellRows)}::jsonb)
		as c(crop_key text, area_key text, status text, respondents_band text)`.execute(trx);
	await sql`insert into release.figure (release_id, measure_key, crop_key, area_key, value, standard_error, cv, lower_bound, upper_bound,
			steadiness, first_quartile, third_quartile)
		select ${releaseId}::uuid, * from jsonb_to_recordset(${JSON.stringify(figureRows)}::jsonb)
		as f(measure_key text, crop_key text, area_key text, value float8, standard_error float8, cv float8,
			lower_bound float8, upper_bound float8, steadiness text, first_quartile float8, third_quartile float8)`.execute(trx);
}
