import type { Task } from "graphile-worker";
import { z } from "zod";
import { releaseChanges } from "#app/auth/change-mailings.server.ts";
import { languages } from "#app/i18n/language.ts";
import { letterKinds } from "#app/mail/templates.ts";
import { checkAnswers, checkSurveys } from "./check-answers.server.ts";
import { computeReleaseDraft } from "./compute-release-draft.server.ts";
import { tellGrantEnd, watchGrantEnds } from "./grant-ends.server.ts";
import { importGrowers, sweepImports } from "./import-growers.server.ts";
import { makeReleaseFiles } from "./make-release-files.server.ts";
import { erasePhotoFiles, sweepPhotos } from "./photos.server.ts";
import { mailInvitation } from "./mail-invitation.server.ts";
import { confirmSubscription, mailReport, mailSubscriber, sweepSubscriptions } from "./mail-report.server.ts";
import { printReport } from "./print-report.server.ts";
import { publishReportAtItsMinute } from "./publish-report.server.ts";
import { publishAtItsMinute } from "./publish-release.server.ts";
import type { JobPayloads } from "./queue.server.ts";
import { sendSample } from "./sample-mail.server.ts";
import { sendMail } from "./send-mail.server.ts";
import { sendReminders } from "./send-reminders.server.ts";
import { tellFollower, tellFollowers } from "./tell-followers.server.ts";
import { thankGrowers } from "./thank-growers.server.ts";

/** Reads a payload against its schema: a job queued by an older version fails with a plain message, not half-way. */
function task<P>(schema: z.ZodType<P>, work: (payload: P, lastTry: boolean) => Promise<void>): Task {
	return (payload, { job }) => work(schema.parse(payload), job.attempts >= job.max_attempts);
}

const Change = z.object({ releaseId: z.uuid(), change: z.enum(releaseChanges) });

/** What a worker does when it starts. */
export { queueMissingFiles } from "./make-release-files.server.ts";
export { queueMissingPdfs } from "./publish-report.server.ts";
export { checkUnchecked } from "./check-answers.server.ts";
export { setReminderAlarms } from "./send-reminders.server.ts";

export const tasks: Record<keyof JobPayloads, Task> = {
	send_mail: task(z.object({ mailingId: z.uuid() }), sendMail),
	send_reminders: task(z.object({ surveyId: z.uuid(), wave: z.int() }), sendReminders),
	send_sample: task(
		z.object({ surveyId: z.uuid(), personId: z.uuid(), kind: z.enum(letterKinds), language: z.enum(languages) }),
		sendSample,
	),
	thank_growers: task(z.object({ releaseDraftId: z.uuid() }), thankGrowers),
	compute_release_draft: task(z.object({ releaseDraftId: z.uuid() }), (payload) => computeReleaseDraft(payload)),
	publish_release: task(z.object({ releaseDraftId: z.uuid() }), publishAtItsMinute),
	make_release_files: task(z.object({ releaseId: z.uuid() }), makeReleaseFiles),
	publish_report: task(z.object({ reportId: z.uuid() }), publishReportAtItsMinute),
	print_report: task(z.object({ reportId: z.uuid(), language: z.enum(languages) }), printReport),
	mail_report: task(z.object({ reportId: z.uuid() }), mailReport),
	mail_subscriber: task(z.object({ reportId: z.uuid(), subscriberId: z.uuid() }), mailSubscriber),
	tell_followers: task(Change, tellFollowers),
	tell_follower: task(Change.extend({ followId: z.uuid() }), tellFollower),
	confirm_subscription: task(z.object({ requestId: z.uuid() }), confirmSubscription),
	sweep_subscriptions: task(z.looseObject({}), sweepSubscriptions),
	mail_invitation: task(z.object({ invitationId: z.uuid() }), mailInvitation),
	tell_grant_end: task(z.object({ roleGrantId: z.uuid() }), tellGrantEnd),
	watch_grant_ends: task(z.looseObject({}), watchGrantEnds),
	erase_photos: task(z.object({ fileNames: z.array(z.string().regex(/^[0-9a-f]{32}$/)) }), erasePhotoFiles),
	sweep_photos: task(z.looseObject({}), sweepPhotos),
	import_growers: task(
		z.object({ importId: z.uuid(), step: z.enum(["read", "check", "write", "undo"]) }),
		importGrowers,
	),
	sweep_imports: task(z.looseObject({}), sweepImports),
	check_answers: task(z.object({ surveyId: z.uuid(), responseId: z.uuid().nullable() }), checkAnswers),
	check_surveys: task(z.looseObject({}), checkSurveys),
};

/** What comes round by itself: the minute and hour in UTC. */
export const crontab = `40 9 * * * sweep_photos ?max=1&fill=1d
50 9 * * * sweep_imports ?max=1&fill=1d
15 10 * * * check_surveys ?max=1&fill=1d
30 10 * * * watch_grant_ends ?max=1&fill=1d`;
