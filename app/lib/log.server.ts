import morgan from "morgan";
import { pino } from "pino";

/**
 * The server's log: one JSON line an event. Personal links and those that stop
 * mail are bearer secrets, so their addresses are never written whole.
 */
export const log = pino({ name: "tallygrove", level: process.env.LOG_LEVEL ?? "info" });

export function withoutToken(url: string): string {
	return url.replace(/\/(r|stop-mail|check|invitation|subscribe|unsubscribe)\/[^/?#]+/g, "/$1/…");
}

// The server writes its request log through morgan; its `url` token is replaced by one that hides personal links.
morgan.token("url", (request) => withoutToken((request as { originalUrl?: string }).originalUrl ?? request.url ?? ""));
