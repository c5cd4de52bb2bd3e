import { log } from "./log.server.ts";
import { isRefusal, refusal } from "./refusal.ts";

/** A service that does not answer, as its reader is told: come back in a few minutes. The log has the whole of it. */
export function serviceAway(error: unknown) {
	log.error({ err: error }, "a service does not answer");
	return refusal("service_away");
}

/** Whether it was thrown since a service does not answer. */
export function isServiceAway(thrown: unknown): boolean {
	const told = typeof thrown === "object" && thrown !== null && "data" in thrown ? thrown.data : null;
	return isRefusal(told) && told.code === "service_away";
}
