import type { Task } from "graphile-worker";
import { z } from "zod";
import { computeReleaseDraft } from "./compute-release-draft.server.ts";
import type { JobPayloads } from "./queue.server.ts";
import { sendMail } from "./send-mail.server.ts";

/** Reads a payload against its schema: a job queued by an older version fails with a plain message, not half-way. */
function task<P>(schema: z.ZodType<P>, work: (payload: P, lastTry: boolean) => Promise<void>): Task {
	return (payload, { job }) => work(schema.parse(payload), job.attempts >= job.max_attempts);
}

export const tasks: Record<keyof JobPayloads, Task> = {
	send_mail: task(z.object({ mailingId: z.uuid() }), sendMail),
	compute_release_draft: task(z.object({ releaseDraftId: z.uuid() }), (payload) => computeReleaseDraft(payload)),
};
