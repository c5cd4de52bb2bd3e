import { createHash } from "node:crypto";
import pg from "pg";
import { RateLimiterPostgres, RateLimiterRes } from "rate-limiter-flexible";
import { env } from "#app/lib/env.server.ts";

let limiters: { ofVisitor: RateLimiterPostgres; ofAddress: RateLimiterPostgres } | undefined;

/** Mails that one visitor can have sent in a day (a whole college behind one proxy), and that one address can be sent. */
const mostOfVisitor = 300;
const mostOfAddress = 3;

function limits() {
	if (limiters) return limiters;
	const shared = {
		storeClient: new pg.Pool({ connectionString: env().DATABASE_URL, max: 2, application_name: "tallygrove-tries" }),
		schemaName: "auth",
		tableName: "tries",
		tableCreated: true,
		duration: 86_400,
	};
	limiters = {
		ofVisitor: new RateLimiterPostgres({ ...shared, keyPrefix: "subscribe", points: mostOfVisitor }),
		ofAddress: new RateLimiterPostgres({ ...shared, keyPrefix: "subscribed", points: mostOfAddress }),
	};
	return limiters;
}

/**
 * Counts a request that makes a mail go to an address somebody typed, so that nobody's inbox can be filled from here. Of the
 * address only a hash is kept, for the day.
 * @returns false when the visitor or the address has had enough.
 */
export async function countSubscribing(request: Request, email: string): Promise<boolean> {
	const visitor = request.headers.get("x-forwarded-for")?.split(",").at(-1)?.trim().slice(0, 100) || "direct";
	const address = createHash("sha256").update(email.toLowerCase()).digest("base64url");
	try {
		await limits().ofVisitor.consume(visitor);
		await limits().ofAddress.consume(address);
		return true;
	} catch (error) {
		if (error instanceof RateLimiterRes) return false;
		throw error;
	}
}
