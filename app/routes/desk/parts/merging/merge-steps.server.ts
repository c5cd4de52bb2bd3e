import { moveGrants, moveGrantsBack } from "#app/auth/moved-grants.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findMergeHindrance, leaveOpenFrames, rejoinFrames, restsOnMerge } from "#app/collect/merged-surveys.server.ts";
import {
	hasChanged,
	lockMerge,
	lockPair,
	type MergeChoice,
	mergeOperations,
	unmergeOperations,
} from "#app/directory/merging/merge.server.ts";

/** What of a merge is not the directory's: the places in open surveys, and who signs in. */
type Others = { frames: { surveyId: string; disposition: string }[]; grantIds: string[] };
export type MergeRefused = "not_active" | "answers_open" | "asked_alone";

/** Why two cannot be merged now; "not_found" where the viewer does not see both. */
export async function findRefusal(trx: Trx, viewer: Associate, keptId: string, droppedId: string) {
	const pair = await lockPair(trx, viewer, keptId, droppedId);
	if (!pair) return "not_found" as const;
	if (pair.kept.status !== "active" || pair.dropped.status !== "active") return { pair, why: "not_active" as const };
	return { pair, why: await findMergeHindrance(trx, keptId, droppedId) };
}

/** Makes one grower of two, all of it or nothing. */
export async function merge(
	trx: Trx,
	viewer: Associate,
	{ keptId, droppedId }: { keptId: string; droppedId: string },
	choice: MergeChoice,
): Promise<"merged" | "not_found" | MergeRefused> {
	const found = await findRefusal(trx, viewer, keptId, droppedId);
	if (found === "not_found") return found;
	if (found.why) return found.why;
	const others: Others = {
		frames: await leaveOpenFrames(trx, droppedId),
		grantIds: await moveGrants(trx, droppedId, keptId),
	};
	await mergeOperations(trx, viewer, found.pair, choice, others);
	return "merged";
}

/** Makes two of one again, as long as nothing has come to rest on the one. */
export async function undoMerge(
	trx: Trx,
	viewer: Associate,
	mergeId: string,
): Promise<"undone" | "not_found" | "changed" | "rests_on_it"> {
	const found = await lockMerge(trx, viewer, mergeId);
	if (!found) return "not_found";
	const { kept, dropped, mergedAt, restore } = found;
	if (hasChanged(found)) return "changed";
	const { plantingIds } = restore;
	if (await restsOnMerge(trx, { keptId: kept.operationId, mergedAt, plantingIds })) return "rests_on_it";
	const { frames, grantIds } = restore.others as Others;
	await unmergeOperations(trx, viewer, found);
	await rejoinFrames(trx, dropped.operationId, frames);
	await moveGrantsBack(trx, grantIds, dropped.operationId);
	return "undone";
}
