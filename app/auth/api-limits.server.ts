import { RateLimiterMemory, RateLimiterRes } from "rate-limiter-flexible";
import { addressOf } from "#app/lib/visitor-address.ts";
import type { KnownKey } from "./api-keys.server.ts";

/** Requests in a minute: of an address, and of a key. */
export const apiLimits = { open: 300, key: 3000 } as const;
const seconds = 60;

// Counted in each process's memory and not in the database: the API only reads, and a count there would turn every read into
// a write that no replica could serve. With several processes a visitor may have as many times the limit, which does no harm.
const counters = {
	open: new RateLimiterMemory({ points: apiLimits.open, duration: seconds }),
	key: new RateLimiterMemory({ points: apiLimits.key, duration: seconds }),
};

export type Counted = { allowed: boolean; headers: Record<string, string> };

/** Counts a request, and says how much is left in the headers of the IETF's draft "RateLimit header fields for HTTP". */
export async function countRequest(request: Request, key: KnownKey | null): Promise<Counted> {
	const policy = key ? "key" : "open";
	const result = await counters[policy].consume(key?.apiKeyId ?? addressOf(request)).catch((error: unknown) => {
		if (error instanceof RateLimiterRes) return error;
		throw error;
	});
	const left = Math.max(0, result.remainingPoints);
	const wait = Math.ceil(result.msBeforeNext / 1000);
	const allowed = result.consumedPoints <= apiLimits[policy];
	return {
		allowed,
		headers: {
			"ratelimit-policy": `"${policy}";q=${apiLimits[policy]};w=${seconds}`,
			ratelimit: `"${policy}";r=${left};t=${wait}`,
			...(!allowed && { "retry-after": `${wait}` }),
		},
	};
}
