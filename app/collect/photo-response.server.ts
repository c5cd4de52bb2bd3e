import { createHash } from "node:crypto";
import { readPhoto } from "./photo-files.server.ts";

/**
 * A photo's picture as an answer to who may see it: never a page or a script, whatever its bytes are (only the browser's own
 * style fits it to the window), and asked about again each time, so that it is gone from every screen when it is gone here.
 * `?size=small` gives the small one.
 * @returns undefined where the file is not there.
 */
export async function photoResponse(folder: string, fileName: string, request: Request): Promise<Response | undefined> {
	const size = new URL(request.url).searchParams.get("size") === "small" ? "small" : "whole";
	const etag = `"${createHash("sha256").update(`${fileName} ${size}`).digest("base64url").slice(0, 22)}"`;
	const headers = {
		"content-type": "image/jpeg",
		"x-content-type-options": "nosniff",
		"content-disposition": 'inline; filename="photo.jpg"',
		"content-security-policy": "default-src 'none'; style-src 'unsafe-inline'",
		"cross-origin-resource-policy": "same-origin",
		"cache-control": "private, no-cache",
		etag,
	};
	if (request.headers.get("if-none-match") === etag) return new Response(null, { status: 304, headers });
	const bytes = await readPhoto(folder, fileName, size);
	return bytes && new Response(new Uint8Array(bytes), { headers });
}
