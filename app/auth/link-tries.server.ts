import pg from "pg";
import { RateLimiterPostgres, RateLimiterRes } from "rate-limiter-flexible";
import { env } from "#app/lib/env.server.ts";
import { addressOf } from "#app/lib/visitor-address.ts";

/** Wrong links that one address may open before it has to wait: a household's mistakes, not a guesser's. */
const mostTries = 60;
const withinSeconds = 600;

let limiter: RateLimiterPostgres | undefined;

function tries(): RateLimiterPostgres {
	limiter ??= new RateLimiterPostgres({
		storeClient: new pg.Pool({ connectionString: env().DATABASE_URL, max: 2, application_name: "tallygrove-tries" }),
		schemaName: "auth",
		tableName: "tries",
		tableCreated: true,
		keyPrefix: "link",
		points: mostTries,
		duration: withinSeconds,
	});
	return limiter;
}

/**
 * Counts an opening of a link that opens nothing. Links that work are never counted, so that nobody can be locked out
 * by somebody else's guesses; the token's 256 bits are what keeps guesses from succeeding.
 * @returns false when the address has had its tries and must wait.
 */
export async function countWrongLink(request: Request): Promise<boolean> {
	try {
		await tries().consume(addressOf(request));
		return true;
	} catch (error) {
		// The library rejects with a count where the limit is reached, and with an error where the database is away.
		if (error instanceof RateLimiterRes) return false;
		throw error;
	}
}
