import { useSyncExternalStore } from "react";
import { type HeldPost, heldPost, watchHeldPost } from "#app/lib/held-post.ts";

/** What this page sent and nobody took, as who sent it is not signed in any more. */
export function useHeldPost(): HeldPost | null {
	return useSyncExternalStore(watchHeldPost, heldPost, () => null);
}
