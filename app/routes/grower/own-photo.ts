import type { Route } from "./+types/own-photo";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { photoResponse } from "#app/collect/photo-response.server.ts";
import { findOwnPhoto } from "#app/collect/photos.server.ts";
import { env } from "#app/lib/env.server.ts";
import { refusal } from "#app/lib/refusal.ts";

/** A photo among a signed-in grower's own past answers. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const fileName = await grower.transaction((trx) => findOwnPhoto(trx, grower.viewer, params, params.photoId));
	const answer = fileName && (await photoResponse(env().PHOTO_DIR, fileName, request));
	if (!answer) throw refusal("page_not_found");
	return answer;
}
