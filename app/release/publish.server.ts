import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { isAsAudited, publishedChecksum } from "./checksums.server.ts";
import { type DraftCell, ReleaseAudit, ReleaseMethod, ReleaseRules } from "./draft.ts";
import { listDraftCells } from "./drafts.server.ts";
import { keepForm } from "./kept-form.server.ts";
import { isUpToDate } from "./season-releases.server.ts";
import { publishedAudit, publishedMethod, publishedRows } from "./published-rows.ts";

export type Published = { outcome: "published"; releaseId: string; number: number };
export type NotPublished = { outcome: "not_found" | "not_waiting" | "not_yet" | "changed" | "outdated" };

/**
 * Publishes an approved draft whose minute has come as a numbered release, in the caller's transaction: all of it or nothing.
 * Only what may be shown is copied; a withheld cell becomes one word. The draft's cells must still be those that were audited,
 * and no other survey of the season may have been published since.
 */
export async function publishRelease(
	trx: Trx,
	releaseDraftId: string,
	codeVersion: string,
): Promise<Published | NotPublished> {
	const draft = await lockDraft(trx, releaseDraftId);
	if (!draft) return { outcome: "not_found" };
	if (draft.status !== "scheduled" || !draft.publish_at) return { outcome: "not_waiting" };
	if (draft.publish_at > new Date()) return { outcome: "not_yet" };
	const cells = await listDraftCells(trx, releaseDraftId);
	const method = ReleaseMethod.parse(draft.method);
	if (!isAsAudited(draft, method, cells)) return { outcome: "changed" };

	const audit = ReleaseAudit.parse(draft.audit);
	if (!(await isUpToDate(trx, draft.survey_id, audit.heldAgainst))) return { outcome: "outdated" };

	const releaseId = releaseDraftId; // one release a draft: trying twice meets the key
	const number = await insertRelease(trx, releaseId, {
		draft,
		method,
		audit,
		rules: ReleaseRules.parse(draft.rules),
		cells,
		codeVersion,
		publishedAt: draft.publish_at,
	});
	await insertCells(trx, releaseId, method, cells);
	await keepForm(trx, releaseId, draft.survey_id);
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "approved", release_id: releaseId })
		.where("release_draft_id", "=", releaseDraftId)
		.execute();
	return { outcome: "published", releaseId, number };
}

export function lockDraft(trx: Trx, releaseDraftId: string) {
	return trx
		.selectFrom("collect.release_draft")
		.selectAll()
		.where("release_draft_id", "=", releaseDraftId)
		.forUpdate()
		.executeTakeFirst();
}
type LockedDraft = NonNullable<Awaited<ReturnType<typeof lockDraft>>>;

async function insertRelease(
	trx: Trx,
	releaseId: string,
	made: {
		draft: LockedDraft;
		method: ReleaseMethod;
		audit: ReleaseAudit;
		rules: ReleaseRules;
		cells: DraftCell[];
		codeVersion: string;
		publishedAt: Date;
	},
): Promise<number> {
	const { draft, method, audit, rules, cells, codeVersion, publishedAt } = made;
	const { measures, areas } = method;
	const row = await trx
		.insertInto("release.release")
		.values({
			release_id: releaseId,
			series_id: draft.survey_id,
			edition: draft.revises ? await nextEdition(trx, draft.revises) : 1,
			revises: draft.revises,
			revision_reason: draft.revision_reason === null ? null : JSON.stringify(draft.revision_reason),
			season: method.season,
			form_key: method.formKey,
			title: JSON.stringify(method.title),
			published_at: publishedAt,
			rules: JSON.stringify(rules),
			method: JSON.stringify(publishedMethod(method, cells)),
			audit: JSON.stringify(publishedAudit(audit)),
			code_version: codeVersion,
			checksum: publishedChecksum(method, cells),
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

async function nextEdition(trx: Trx, revises: string): Promise<number> {
	const row = await trx
		.selectFrom("release.release")
		.select("edition")
		.where("release_id", "=", revises)
		.executeTakeFirstOrThrow();
	return row.edition + 1;
}

async function insertCells(trx: Trx, releaseId: string, method: ReleaseMethod, cells: DraftCell[]): Promise<void> {
	const { cellRows, figureRows } = publishedRows(method, cells);
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
