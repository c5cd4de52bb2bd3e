import { randomBytes } from "node:crypto";
import { createContext, type MiddlewareFunction } from "react-router";

export const nonceContext = createContext<string>("");

/**
 * Headers of every answer: a content policy with one nonce a request, no framing, no sniffing, and an address that is never
 * told to other sites. Pages are private by default; a route that may be cached says so itself.
 */
export const securityHeaders: MiddlewareFunction<Response> = async ({ context }, next) => {
	const nonce = randomBytes(16).toString("base64");
	context.set(nonceContext, nonce);
	const response = await next();
	// Vite's development client adds style elements and opens a socket.
	const dev = import.meta.env.DEV;
	const policy = [
		"default-src 'self'",
		`script-src 'self' 'nonce-${nonce}'`,
		dev ? "style-src 'self' 'unsafe-inline'" : "style-src 'self'",
		"img-src 'self' data:",
		"font-src 'self'",
		"worker-src 'self'",
		dev ? "connect-src 'self' ws:" : "connect-src 'self'",
		"object-src 'none'",
		"base-uri 'none'",
		"form-action 'self'",
		"frame-ancestors 'none'",
	];
	const defaults: Record<string, string> = {
		"content-security-policy": policy.join("; "),
		"x-content-type-options": "nosniff",
		"referrer-policy": "same-origin",
		"cross-origin-opener-policy": "same-origin",
		"permissions-policy": "camera=(), microphone=(), geolocation=(self)",
		"strict-transport-security": "max-age=31536000; includeSubDomains",
		"cache-control": "private, no-store",
	};
	for (const [name, value] of Object.entries(defaults))
		if (!response.headers.has(name)) response.headers.set(name, value);
	return response;
};
