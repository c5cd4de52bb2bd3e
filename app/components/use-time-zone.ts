import { useSyncExternalStore } from "react";

const never = () => () => {};

/** The zone of the reader's own clock; undefined on the server and until scripts run. */
export function useTimeZone(): string | undefined {
	return useSyncExternalStore(
		never,
		() => Intl.DateTimeFormat().resolvedOptions().timeZone,
		() => undefined,
	);
}
