import type { Route } from "./+types/photo";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { photoResponse } from "#app/collect/photo-response.server.ts";
import { findSentPhoto } from "#app/collect/photos.server.ts";
import { env } from "#app/lib/env.server.ts";
import { refusal } from "#app/lib/refusal.ts";

/** A photo that a grower sent in, for associates of the grower's state. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const fileName = await desk.transaction((trx) => findSentPhoto(trx, desk.viewer, params));
	const answer = fileName && (await photoResponse(env().PHOTO_DIR, fileName, request));
	if (!answer) throw refusal("page_not_found");
	return answer;
}
