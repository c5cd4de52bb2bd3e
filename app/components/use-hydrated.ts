import { useSyncExternalStore } from "react";

const never = () => () => {};

/** False on the server and until scripts run: what works without them is drawn first. */
export function useHydrated(): boolean {
	return useSyncExternalStore(
		never,
		() => true,
		() => false,
	);
}
