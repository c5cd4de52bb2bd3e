import { logEvent } from "#app/auth/event-log.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { type Language, languages } from "#app/i18n/language.ts";
import { log } from "#app/lib/log.server.ts";
import { publishScheduled } from "#app/publish/drafting/report-approval.server.ts";
import { takePhotoAway } from "#app/publish/drafting/report-photos.server.ts";
import type { PhotoReason } from "#app/publish/report-photo.ts";
import { listReportsWithoutFile } from "#app/publish/reports.server.ts";
import { queueJob } from "./queue.server.ts";

/** One job a report: a new minute takes the place of the one before. */
export const publishReportKey = (reportId: string) => `publish_report:${reportId}`;

/** What follows when a report is out, queued in the transaction that publishes it: its PDFs, then the mail to subscribers. */
export async function queueAfterPublication(trx: Trx, reportId: string): Promise<void> {
	await queuePrinting(trx, reportId);
	// A little later, so that the mail can point to the PDFs.
	const runAt = new Date(Date.now() + mailDelaySeconds * 1000);
	await queueJob(trx, "mail_report", { reportId }, { jobKey: `mail_report:${reportId}`, runAt });
}
const mailDelaySeconds = 30;

async function queuePrinting(trx: Trx, reportId: string): Promise<void> {
	for (const language of languages) await queuePrint(trx, reportId, language);
}

function queuePrint(trx: Trx, reportId: string, language: Language): Promise<void> {
	return queueJob(trx, "print_report", { reportId, language }, { jobKey: `print_report:${reportId}:${language}` });
}

/** What the worker does when it starts: reports that were seeded, or published where no browser was installed, get their PDFs. */
export async function queueMissingPdfs(): Promise<void> {
	await scopedTransaction({ kind: "none" }, async (trx) => {
		for (const language of languages) {
			for (const reportId of await listReportsWithoutFile(language)) await queuePrint(trx, reportId, language);
		}
	});
}

/** Takes a photo out of a report, and has what was published with it printed anew. */
export async function takeReportPhotoAway(
	trx: Trx,
	viewer: Associate | Coordinator,
	reportId: string,
	photoId: string,
	because: PhotoReason,
): Promise<"taken_away" | "not_found"> {
	const taken = await takePhotoAway(trx, viewer, reportId, photoId, because);
	if (taken.outcome === "not_found") return "not_found";
	for (const version of taken.printAgain) await queuePrinting(trx, version);
	return "taken_away";
}

/** Publishes a report at the minute that its approver set. */
export async function publishReportAtItsMinute({ reportId }: { reportId: string }): Promise<void> {
	const outcome = await scopedTransaction({ kind: "network" }, async (trx) => {
		const published = await publishScheduled(trx, reportId);
		if (published.outcome !== "published") return published.outcome;
		await logEvent(trx, {
			personId: published.approvedBy,
			action: "report.published",
			subjectKind: "report",
			subjectId: reportId,
			detail: {},
		});
		await queueAfterPublication(trx, reportId);
		return published.outcome;
	});
	log.info({ reportId, outcome }, "scheduled report");
	// The queue's clock is ahead of the database's: tried again.
	if (outcome === "not_yet") throw new Error(outcome);
}
