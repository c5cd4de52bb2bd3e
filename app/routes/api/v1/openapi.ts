import type { Route } from "./+types/openapi";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { openApiDocument } from "#app/publish/api/openapi.ts";
import { operations } from "#app/publish/api/operations.ts";
import { answer } from "./parts/answer.server.ts";

/** The API told to programs, in the asker's language. */
export function loader(args: Route.LoaderArgs) {
	const language = getLanguage(args.context);
	return answer(operations.openapi, args, async ({ words }) => ({
		version: language,
		body: async () => ({ content: JSON.stringify(openApiDocument(env().BASE_URL, words[language])) }),
	}));
}
export const action = loader;
