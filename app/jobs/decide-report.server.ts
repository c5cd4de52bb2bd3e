import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { momentIn } from "#app/collect/survey-closing.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import type { ReportDecision } from "#app/publish/drafting/decision.schema.ts";
import {
	publishReport,
	scheduleReport,
	sendReportBack,
	unscheduleReport,
} from "#app/publish/drafting/report-approval.server.ts";
import { publishReportKey, queueAfterPublication } from "./publish-report.server.ts";
import { dropJob, queueJob } from "./queue.server.ts";

/** The clock by which coordinators set a minute. */
export const networkTimeZone = "America/Chicago";
/** Further ahead than a year is a slip of the hand. */
const farthestDays = 366;

type Outcome =
	| ("published" | "scheduled" | "unscheduled" | "sent_back")
	| ("not_found" | "not_waiting" | "not_scheduled" | "own_report");
export type DecidedReport = { outcome: Outcome } | { problem: Problem };

/** Takes a coordinator's decision on a report, with what it queues, in the caller's transaction. */
export async function decideReport(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
	decision: ReportDecision,
	now: Date,
): Promise<DecidedReport> {
	switch (decision.intent) {
		case "publish": {
			const outcome = await publishReport(trx, viewer, reportId, now);
			if (outcome === "published") await queueAfterPublication(trx, reportId);
			return { outcome };
		}
		case "schedule":
			return schedule(trx, viewer, reportId, decision, now);
		case "unschedule": {
			const outcome = await unscheduleReport(trx, viewer, reportId);
			if (outcome === "unscheduled") await dropJob(trx, publishReportKey(reportId));
			return { outcome };
		}
		case "send_back":
			return { outcome: await sendReportBack(trx, viewer, reportId, decision.note) };
	}
}

async function schedule(
	trx: Trx,
	viewer: Coordinator,
	reportId: string,
	{ publishOn, publishAt }: Extract<ReportDecision, { intent: "schedule" }>,
	now: Date,
): Promise<DecidedReport> {
	const moment = momentIn(publishOn, publishAt, networkTimeZone);
	if (!moment) return { problem: { field: "publishOn", code: "date_wrong" } };
	if (moment <= now) return { problem: { field: "publishOn", code: "closing_past" } };
	if (moment.getTime() - now.getTime() > farthestDays * 86_400_000)
		return { problem: { field: "publishOn", code: "closing_far" } };
	const outcome = await scheduleReport(trx, viewer, reportId, moment);
	if (outcome === "scheduled")
		await queueJob(trx, "publish_report", { reportId }, { jobKey: publishReportKey(reportId), runAt: moment });
	return { outcome };
}
