import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { addAnsweredSurvey } from "#tests/database/answered-survey-fixture.ts";
import { asDesk } from "#tests/database/surveys-fixture.ts";

/** What a draft is set to before each call, so that what one call made of it does not hide what the next could do. */
export type Target = { draftId: string; surveyId: string; status: "audit_failed" | "audited" };

/** A draft with all its cells, that only its status keeps from going out. */
export async function addTarget(owner: Client, drafter: Associate, status: Target["status"]): Promise<Target> {
	const surveyId = await addAnsweredSurvey(owner, drafter);
	// A season each: a draft that another survey's release has overtaken would be refused for that alone.
	await owner.query(
		"update collect.survey set season = (select max(season) + 1 from collect.survey) where survey_id = $1",
		[surveyId],
	);
	const made = await asDesk(drafter, async (trx) => {
		await closeSurvey(trx, drafter, surveyId);
		return createDraft(trx, drafter, surveyId, networkRules);
	});
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	const target = { draftId: made.releaseDraftId, surveyId, status };
	await owner.query(
		"update collect.release_draft set audit = jsonb_set(audit, '{passed}', $2), status = $3 where release_draft_id = $1",
		[target.draftId, status === "audited", status],
	);
	return target;
}

/** Drafts that an associate has begun anew are gone again too. */
export async function putBack(owner: Client, { draftId, surveyId, status }: Target): Promise<void> {
	await owner.query("delete from collect.release_draft where survey_id = $1 and release_draft_id <> $2", [
		surveyId,
		draftId,
	]);
	await owner.query(
		`update collect.release_draft set status = $2, decided_by = null, decided_at = null, decision_note = null, publish_at = null
		where release_draft_id = $1 and status not in ('approved', $2)`,
		[draftId, status],
	);
}

/** Everything that readers may come to, as one text. */
export async function released(owner: Client): Promise<string> {
	const { rows: tables } = await owner.query<{ name: string }>(
		"select schemaname || '.' || tablename as name from pg_tables where schemaname in ('release', 'publish') order by 1",
	);
	const text: string[] = [];
	for (const { name } of tables) {
		const { rows } = await owner.query<{ row: string }>(`select t::text as row from ${name} t order by 1`);
		text.push(...rows.map(({ row }) => `${name} ${row}`));
	}
	return text.join("\n");
}
export async function releases(owner: Client): Promise<string[]> {
	const { rows } = await owner.query("select release_id from release.release");
	return rows.map(({ release_id }) => release_id as string);
}
