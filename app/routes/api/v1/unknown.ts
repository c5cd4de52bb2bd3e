import { z } from "zod";
import type { Route } from "./+types/unknown";
import { operations } from "#app/publish/api/operations.ts";
import { ApiProblem } from "#app/publish/api/problem.ts";
import { answer } from "./parts/answer.server.ts";

/** Whatever else is asked for under the API's address is refused as the API refuses. */
export function loader({ request, context }: Route.LoaderArgs) {
	const anything = { ...operations.entry, query: z.looseObject({}), types: [] };
	return answer(anything, { request, context, params: {} }, () => {
		throw new ApiProblem("not_found");
	});
}
export const action = loader;
