import { z } from "zod";
import type { Route } from "./+types/map-counties";
import { cachedJson, problem } from "#app/publish/cached-json.server.ts";
import { countiesFile } from "#app/publish/geometry.server.ts";

const Query = z.object({
	states: z.string().regex(/^\d{2}(-\d{2}){0,59}$/, "states are two-digit codes joined by a hyphen"),
	version: z.string().max(40).optional(),
});

/** County outlines, state lines and state names: public geography, the same for every release. */
export function loader({ request }: Route.LoaderArgs) {
	const query = Query.safeParse(Object.fromEntries(new URL(request.url).searchParams));
	if (!query.success) return problem(400, "The address needs states as two-digit codes, such as states=17-19");
	const file = countiesFile([...new Set(query.data.states.split("-"))]);
	if (!file) return problem(404, "No such state");
	// An address with another version than the file's may be asked for by an old page: right, but not for ever.
	return cachedJson(request, file.body, query.data.version === file.version ? "version" : "figures");
}
