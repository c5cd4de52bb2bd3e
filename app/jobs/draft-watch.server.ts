import type { scopedTransaction } from "#app/auth/scope.server.ts";
import type { ProtectProgress } from "#app/protect/protect.ts";
import type { DraftProgress } from "#app/release/draft.ts";
import { saveDraftProgress } from "#app/release/draft-progress.server.ts";

/** Nobody waits for this draft any more. */
export class DraftNotWanted extends Error {}

const EVERY_MS = 1500;

/**
 * Notes how far a draft is, every second or so, and asks at the same time whether it is still wanted. Aborts when not,
 * with `DraftNotWanted`.
 */
export function watchDraft(releaseDraftId: string, transact: typeof scopedTransaction) {
	const stop = new AbortController();
	let latest: DraftProgress = { phase: "choosing", done: 0, total: 0, gap: null };
	let saving: Promise<void> = Promise.resolve();
	const save = async () => {
		const wanted = await transact({ kind: "network" }, (trx) => saveDraftProgress(trx, releaseDraftId, latest));
		if (!wanted) stop.abort(new DraftNotWanted());
	};
	const timer = setInterval(() => {
		// A save that fails is no fault of the draft's: the next one, or its end, will tell.
		saving = saving.then(save).catch(() => {});
	}, EVERY_MS);
	return {
		signal: stop.signal,
		onProgress: ({ phase, done, total, lost, bound }: ProtectProgress) => {
			latest = { phase, done, total, gap: gapOf({ lost, bound }) };
		},
		async [Symbol.asyncDispose]() {
			clearInterval(timer);
			await saving;
		},
	};
}

/** How much more is lost than must be at least, as a share in thousandths. A sum of what is withheld may not be told. */
export function gapOf({ lost, bound }: { lost: number; bound: number }): number | null {
	if (!(lost > 0) || !Number.isFinite(lost)) return null;
	return Math.max(0, Math.ceil(1000 * (1 - bound / lost) - 1e-6)) / 1000;
}
