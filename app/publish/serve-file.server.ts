import { matches } from "./cached-json.server.ts";
import { type FileFacts, readFilePart } from "./release-files.server.ts";

/**
 * A release's file may be kept a while, and not for ever: what is withdrawn must soon be served by nobody. Nobody on the way
 * may pack it (RFC 9111, section 5.2.2.6): tag, checksum and parts are those of its bytes as they are kept.
 */
const caching = "max-age=300, no-transform";

/**
 * A file of a release, whole or in part (RFC 9110, sections 13 and 14), with the checksum it was kept under as its tag.
 * @param name what it is saved as.
 */
export async function serveFile(
	request: Request,
	releaseId: string,
	file: FileFacts,
	{ name, visibility }: { name: string; visibility: "public" | "private" },
): Promise<Response> {
	const etag = `"${file.sha256}"`;
	const headers = new Headers({
		etag,
		"accept-ranges": "bytes",
		"cache-control": `${visibility}, ${caching}`,
		"content-type": file.mediaType,
		"content-disposition": `attachment; filename="${name}"`,
		"repr-digest": `sha-256=:${Buffer.from(file.sha256, "hex").toString("base64")}:`,
	});
	if (matches(request.headers.get("if-none-match"), etag)) {
		for (const unchanged of ["content-type", "content-disposition", "repr-digest"]) headers.delete(unchanged);
		return new Response(null, { status: 304, headers });
	}

	const part = askedPart(request, etag, file.byteCount);
	if (part === "outside") {
		headers.set("content-range", `bytes */${file.byteCount}`);
		headers.delete("content-disposition");
		return new Response(null, { status: 416, headers });
	}
	const { first, last } = part ?? { first: 0, last: file.byteCount - 1 };
	headers.set("content-length", `${last - first + 1}`);
	if (part) headers.set("content-range", `bytes ${first}-${last}/${file.byteCount}`);
	const body = request.method === "HEAD" ? null : await readFilePart(releaseId, file.name, { first, last });
	return new Response(body as BodyInit | null, { status: part ? 206 : 200, headers });
}

/** A file's name on the taker's disk tells which release it is of; the archive's own name does. */
export function savedName(release: number, name: string): string {
	return name.endsWith(".zip") ? name : `tallygrove-release-${release}-${name}`;
}

type Part = { first: number; last: number };

/**
 * The one part that is asked for. Null is all of it: also for several parts at once, which a server may answer so, for what
 * does not read as a range, and where `If-Range` names another version.
 */
export function askedPart(request: Request, etag: string, size: number): Part | null | "outside" {
	const range = /^bytes=(\d{0,15})-(\d{0,15})$/.exec(request.headers.get("range")?.trim() ?? "");
	const condition = request.headers.get("if-range");
	if (!range || request.method !== "GET" || (condition !== null && condition !== etag)) return null;
	const [, from, to] = range;
	if (from === "" && to === "") return null;
	if (from === "") return Number(to) === 0 ? "outside" : { first: Math.max(0, size - Number(to)), last: size - 1 };
	if (Number(from) >= size) return "outside";
	if (to !== "" && Number(to) < Number(from)) return null;
	return { first: Number(from), last: to === "" ? size - 1 : Math.min(Number(to), size - 1) };
}
