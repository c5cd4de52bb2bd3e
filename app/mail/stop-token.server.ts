import { createHmac, hkdfSync, timingSafeEqual } from "node:crypto";
import { env } from "#app/lib/env.server.ts";

const idBytes = 16;
const macBytes = 32;

/**
 * The token that stops an operation's mail: its id and a MAC of 256 bits over it. Nothing is stored, so that every mail that
 * was ever sent keeps its way out, for as long as the server's secret stays the same.
 */
export function stopTokenOf(operationId: string): string {
	const id = Buffer.from(operationId.replaceAll("-", ""), "hex");
	return Buffer.concat([id, macOf(id)]).toString("base64url");
}

/** The operation whose mail a token stops; all that was not made by `stopTokenOf` gives the same undefined. */
export function operationOfStopToken(token: string): string | undefined {
	if (!/^[A-Za-z0-9_-]{64}$/.test(token)) return undefined;
	const bytes = Buffer.from(token, "base64url");
	if (bytes.length !== idBytes + macBytes) return undefined;
	const id = bytes.subarray(0, idBytes);
	if (!timingSafeEqual(bytes.subarray(idBytes), macOf(id))) return undefined;
	return id.toString("hex").replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, "$1-$2-$3-$4-$5");
}

/** The address for a mail's headers and its last line. */
export function stopAddressOf(operationId: string): string {
	return `${env().BASE_URL}/stop-mail/${stopTokenOf(operationId)}`;
}

/** Under a key of its own, so that nothing else that the server signs can pass for a token. */
function macOf(id: Buffer): Buffer {
	const key = hkdfSync("sha256", env().SESSION_SECRET, "", "tallygrove stop mail", 32);
	return createHmac("sha256", Buffer.from(key)).update(id).digest();
}
