import { createHash } from "node:crypto";
import type { Route } from "./+types/releases";
import { env } from "#app/lib/env.server.ts";
import { pageOfList } from "#app/publish/api/cursor.server.ts";
import { releaseItem, stateOf } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listEveryRelease, listRespondentsBands } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer } from "./parts/list-answer.server.ts";

/** Every release, the latest first, also those that were replaced or withdrawn. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.releases, args, async (asked) => {
		const { season, state, limit } = asked.query;
		const every = await listEveryRelease();
		const wanted = every.filter(
			(release) => (!season || season.includes(release.season)) && (!state || state.includes(stateOf(release))),
		);
		const version = createHash("sha256").update(JSON.stringify(every)).digest("base64url");
		return listAnswer(operations.releases, asked, version, async (after) => {
			const bands = await listRespondentsBands();
			const { rows, last } = pageOfList(wanted, ({ number }) => number, { after, limit });
			return { rows: rows.map((one) => releaseItem(one, bands[one.releaseId] ?? null, env().BASE_URL)), last };
		});
	});
}
export const action = loader;
