import { createHmac, hkdfSync, timingSafeEqual } from "node:crypto";
import { env } from "#app/lib/env.server.ts";

const idBytes = 16;
const macBytes = 32;
/** What a token lets one do. Each has a key of its own, so that no token passes for one of another kind. */
export type TokenPurpose = "stop mail" | "confirm subscription" | "unsubscribe" | "unfollow";

/**
 * A token that stands for one row: its id and a MAC of 256 bits over it. Nothing is stored, so that every mail that was ever
 * sent keeps its way out, for as long as the server's secret stays the same.
 */
export function tokenOf(purpose: TokenPurpose, rowId: string): string {
	const id = Buffer.from(rowId.replaceAll("-", ""), "hex");
	return Buffer.concat([id, macOf(purpose, id)]).toString("base64url");
}

/** The row that a token stands for; all that was not made by `tokenOf` for this purpose gives the same undefined. */
export function idOfToken(purpose: TokenPurpose, token: string): string | undefined {
	if (!/^[A-Za-z0-9_-]{64}$/.test(token)) return undefined;
	const bytes = Buffer.from(token, "base64url");
	if (bytes.length !== idBytes + macBytes) return undefined;
	const id = bytes.subarray(0, idBytes);
	if (!timingSafeEqual(bytes.subarray(idBytes), macOf(purpose, id))) return undefined;
	return id.toString("hex").replace(/^(.{8})(.{4})(.{4})(.{4})(.{12})$/, "$1-$2-$3-$4-$5");
}

/** Under a key of its own, so that nothing else that the server signs can pass for a token. */
function macOf(purpose: TokenPurpose, id: Buffer): Buffer {
	const key = hkdfSync("sha256", env().SESSION_SECRET, "", `tallygrove ${purpose}`, 32);
	return createHmac("sha256", Buffer.from(key)).update(id).digest();
}
