import type { Task, TaskList } from "graphile-worker";
import { z } from "zod";
import { computeReleaseDraft } from "./compute-release-draft.server.ts";
import type { JobPayloads } from "./queue.server.ts";

/** Reads a payload against its schema: a job queued by an older version fails with a plain message, not half-way. */
function task<K extends keyof JobPayloads>(schema: z.ZodType<JobPayloads[K]>, work: (payload: JobPayloads[K]) => Promise<void>): Task {
	return (payload) => work(schema.parse(payload));
}

export const tasks: TaskList = {
	compute_release_draft: task(z.object({ releaseDraftId: z.uuid() }), computeReleaseDraft),
};
