import { sentByHeader } from "#app/lib/sent-by.ts";
import { readableForm } from "#app/lib/readable-form.ts";
import { isRefusal, type PostedForm, refusal } from "#app/lib/refusal.ts";
import { senderOf } from "./holder.server.ts";
import { findSessionHolder } from "./session.server.ts";

const heldCodes = new Set(["sign_in_needed", "link_session_over", "other_person"]);
/** Bytes of a form that a page of a refusal holds. */
const mostHeld = 1_000_000;

/**
 * A guard's refusal with the form that it refused, so that the page of the refusal can send it again: nothing is stored. Where
 * scripts sent it, the page that it was typed on stays, and holds it itself.
 */
export async function withPosted(refused: unknown, request: Request): Promise<unknown> {
	const said = (refused as { data?: unknown } | null)?.data;
	if (request.method !== "POST" || request.headers.has(sentByHeader)) return refused;
	if (!isRefusal(said) || !heldCodes.has(said.code)) return refused;
	return refusal(said.code, { posted: (await readPosted(request)) ?? "lost" });
}

/** None where files were sent, or where nobody knows whose page it was: somebody else could then send it. */
async function readPosted(request: Request): Promise<PostedForm | undefined> {
	const isText = /^application\/x-www-form-urlencoded\b/i.test(request.headers.get("content-type") ?? "");
	if (!isText || Number(request.headers.get("content-length") ?? Infinity) > mostHeld) return undefined;
	const holder = senderOf(request) ?? (await findSessionHolder(request.headers.get("cookie")));
	if (!holder) return undefined;
	const form = readableForm(await request.formData());
	return { holder, fields: [...form].map(([name, value], place) => ({ place, name, value: String(value) })) };
}
