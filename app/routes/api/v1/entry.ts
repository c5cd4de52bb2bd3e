import type { Route } from "./+types/entry";
import { env } from "#app/lib/env.server.ts";
import { operations } from "#app/publish/api/operations.ts";
import { answer } from "./parts/answer.server.ts";

/** Where a program begins. */
export function loader(args: Route.LoaderArgs) {
	const site = env().BASE_URL;
	const entry = {
		releases: `${site}/api/v1/releases`,
		openapi: `${site}/api/v1/openapi.json`,
		reference: `${site}/api`,
		data: `${site}/data`,
	};
	return answer(operations.entry, args, async () => ({
		version: site,
		body: async () => ({ content: JSON.stringify(entry) }),
	}));
}
export const action = loader;
