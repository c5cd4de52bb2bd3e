import type { Route } from "./+types/report-photo";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { draftPhoto } from "#app/routes/desk/parts/report-photo-answer.server.ts";

/** A photo of a report that waits for approval, for those who approve reports. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	return draftPhoto(network, params.photoId);
}
