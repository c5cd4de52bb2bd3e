import type { Access } from "#app/auth/guard.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findDraftPhoto } from "#app/publish/drafting/report-photos.server.ts";

/** A photo of any report, kept by the viewer's own browser alone. */
export async function draftPhoto(access: Access<Associate> | Access<Coordinator>, photoId: string): Promise<Response> {
	const { viewer } = access;
	const bytes = await access.transaction((trx) => findDraftPhoto(trx, viewer, photoId));
	if (!bytes) throw refusal("report_not_found");
	return new Response(new Uint8Array(bytes), {
		headers: { "content-type": "image/jpeg", "cache-control": "private, max-age=300" },
	});
}
