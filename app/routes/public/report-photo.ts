import type { Route } from "./+types/report-photo";
import { refusal } from "#app/lib/refusal.ts";
import { keptLikeFigures } from "#app/publish/cached-json.server.ts";
import { findReportPhoto } from "#app/publish/report-photo.server.ts";

/** A photo of a published report. One of a report whose figures were withdrawn is served to nobody any more. */
export async function loader({ params }: Route.LoaderArgs) {
	const bytes = await findReportPhoto(params.photoId);
	if (!bytes) throw refusal("report_not_found");
	return new Response(new Uint8Array(bytes), { headers: { "content-type": "image/jpeg", ...keptLikeFigures } });
}
