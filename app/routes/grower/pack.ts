import type { Route } from "./+types/pack";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { getAnswering } from "./parts/answering.server.ts";
import { packOf } from "./parts/phone.server.ts";

/** An opened survey for a phone to take along where there is no signal. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const answering = await getAnswering(context, params);
	const pack = packOf(answering, getLanguage(context));
	if (!pack) throw refusal("survey_not_found");
	return Response.json(pack);
}
