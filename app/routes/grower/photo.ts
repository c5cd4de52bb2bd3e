import { data } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/photo";
import { requireGrower } from "#app/auth/guard.server.ts";
import { photoResponse } from "#app/collect/photo-response.server.ts";
import { mostPhotoBytes, notKept } from "#app/collect/photo.ts";
import { findOwnPhoto } from "#app/collect/photos.server.ts";
import { env } from "#app/lib/env.server.ts";
import { readAtMost } from "#app/lib/read-at-most.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { takeAway, takePiece } from "./parts/taking-photos.server.ts";

/** A photo of the survey that is being answered, for its own grower and nobody else. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const grower = requireGrower(context, params);
	const fileName = await grower.transaction((trx) => findOwnPhoto(trx, grower.viewer, params, params.photoId));
	const answer = fileName && (await photoResponse(env().PHOTO_DIR, fileName, request));
	if (!answer) throw refusal("page_not_found");
	return answer;
}

const mostPieceBytes = 1024 * 1024;
/** Which piece of which photo is sent; the piece itself is the body. The phone makes the photo's id. */
const Piece = z.object({
	photoId: z.uuid().toLowerCase(),
	questionKey: z.string().max(200),
	offset: z.coerce.number().int().min(0).max(mostPhotoBytes),
	size: z.coerce.number().int().min(1).max(mostPhotoBytes),
});

/**
 * Takes a photo piece by piece, or takes it away. A piece that comes again is harmless; one that comes too early is answered
 * with how far the photo has come.
 */
export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireGrower(context, params);
	if (request.method === "DELETE") {
		await takeAway(grower, params, params.photoId);
		return data({ removed: true });
	}
	const { searchParams } = new URL(request.url);
	const sent = Piece.safeParse({ ...Object.fromEntries(searchParams), photoId: params.photoId });
	if (!sent.success) throw refusal("form_not_understood");
	const piece = await readAtMost(request, Math.min(mostPieceBytes, sent.data.size - sent.data.offset));
	if (!piece) throw refusal("form_not_understood");
	const taken = await takePiece(grower, params, sent.data, piece);
	if (!("problem" in taken)) return data(taken);
	return data(taken, { status: taken.problem.code === notKept.code ? 503 : 400 });
}
