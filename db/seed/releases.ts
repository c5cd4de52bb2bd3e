import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { publishReport } from "#app/publish/drafting/report-approval.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { approveDraft } from "#app/release/approval.server.ts";
import { publishRelease } from "#app/release/publish.server.ts";
import { draftWords } from "#app/routes/desk/parts/report-words.server.ts";
import { moveLog } from "./move-log.ts";
import type { Season } from "./seasons.ts";
import { reportWords } from "./words.ts";

export type Team = { associate: Associate; coordinator: Coordinator; codeVersion: string };
type Released = Season & { release: NonNullable<Season["release"]> };

export function isOver(season: Season): season is Released {
	return season.release !== null;
}

export async function hasRelease(trx: Trx, { surveyId }: Season): Promise<boolean> {
	const draft = await trx
		.selectFrom("collect.release_draft")
		.select("release_draft_id")
		.where("survey_id", "=", surveyId)
		.where("status", "=", "approved")
		.executeTakeFirst();
	return draft !== undefined;
}

/**
 * A season's release with its crop report, by the same steps as at the desk: drafted, audited, approved by a second person,
 * told of in a report that a second person publishes. All in the caller's transaction.
 */
export async function fillRelease(trx: Trx, team: Team, season: Released): Promise<string> {
	const releaseDraftId = await draftRelease(trx, team.associate, season);
	await approveDraft(trx, team.coordinator, releaseDraftId, season.release.publishedAt);
	const published = await publishRelease(trx, releaseDraftId, team.codeVersion);
	if (published.outcome !== "published") throw new Error(`release ${season.season}: ${published.outcome}`);
	const { releaseId, number } = published;
	const about = { subjectKind: "release", subjectId: releaseId, detail: { number } };
	await logEvent(trx, { personId: team.coordinator.personId, action: "release.published", ...about });
	await moveLog(trx, releaseId, season.release.publishedAt, "release.published");
	if (!season.release.report) return `release ${number}`;
	await writeReport(trx, team, season.season, season.release.report, releaseId);
	return `release ${number} with its report`;
}

async function draftRelease(trx: Trx, associate: Associate, { season, surveyId, release }: Released): Promise<string> {
	const made = await createDraft(trx, associate, surveyId, networkRules);
	if (made.outcome !== "drafted") throw new Error(`draft ${season}: ${made.outcome}`);
	const { releaseDraftId } = made;
	await computeReleaseDraft({ releaseDraftId }, (_scope, work) => work(trx));
	await trx
		.updateTable("collect.release_draft")
		.set({ drafted_at: release.draftedAt, computed_at: new Date(release.draftedAt.getTime() + 40_000) })
		.where("release_draft_id", "=", releaseDraftId)
		.execute();
	const about = { subjectKind: "release_draft", subjectId: releaseDraftId, detail: { surveyId } };
	await logEvent(trx, { personId: associate.personId, action: "release.drafted", ...about });
	await moveLog(trx, releaseDraftId, release.draftedAt);
	return releaseDraftId;
}

async function writeReport(
	trx: Trx,
	{ associate, coordinator }: Team,
	season: number,
	{ startedAt, submittedAt, publishedAt }: NonNullable<Released["release"]["report"]>,
	releaseId: string,
): Promise<void> {
	const reportId = await startReport(trx, associate, releaseId, await draftWords());
	if (!reportId) throw new Error(`release ${season} has nothing to report`);
	await addWords(trx, associate, reportId, season);
	const submitted = await submitReport(trx, associate, reportId);
	// A published report is frozen, so these times are set before it is.
	await trx
		.updateTable("publish.report")
		.set({ created_at: startedAt, submitted_at: submittedAt })
		.where("report_id", "=", reportId)
		.execute();
	const published = await publishReport(trx, coordinator, reportId, publishedAt);
	if (published !== "published") throw new Error(`report ${season}: ${submitted}, ${published}`);
	await moveLog(trx, reportId, startedAt, "report.started");
	await moveLog(trx, reportId, submittedAt, "report.submitted");
	await moveLog(trx, reportId, publishedAt, "report.published");
}

/** The associate's own paragraph, after the first of the draft's. */
async function addWords(trx: Trx, associate: Associate, reportId: string, season: number): Promise<void> {
	const words = reportWords[season];
	const report = await findReport(trx, associate, reportId);
	if (!words || !report) return;
	const blocks = report.content.blocks.toSpliced(2, 0, { id: "own1", type: "text", text: words });
	await saveReport(trx, associate, reportId, report.edit, { ...report.content, blocks });
}
