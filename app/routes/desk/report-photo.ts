import type { Route } from "./+types/report-photo";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { draftPhoto } from "./parts/report-photo-answer.server.ts";

/** A photo of a report that is being written, for those who write reports. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return draftPhoto(desk, params.photoId);
}
