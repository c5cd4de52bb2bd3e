import { log } from "./log.server.ts";
import { refusal } from "./refusal.ts";

/** A service that does not answer, as its reader is told: come back in a few minutes. The log has the whole of it. */
export function serviceAway(error: unknown) {
	log.error({ err: error }, "a service does not answer");
	return refusal("service_away");
}
