import { z } from "zod";
import type { Route } from "./+types/map-figures";
import { cachedJson, problem } from "#app/publish/cached-json.server.ts";
import { figuresBody, findMapFigures } from "#app/publish/figures.server.ts";
import { findRelease } from "#app/publish/releases.server.ts";

const Address = z.object({
	release: z.coerce.number().int().positive().max(2_147_483_647),
	measure: z.string().regex(/^[a-z][a-z0-9_.]{0,79}$/),
	crop: z.string().regex(/^[a-z_]{1,40}$/),
	kind: z.enum(["county", "district"]).default("county"),
});

/** The figures of one map, read as the reader's role: nothing here can see further than what is released. */
export async function loader({ request, params }: Route.LoaderArgs) {
	const kind = new URL(request.url).searchParams.get("kind") ?? undefined;
	const address = Address.safeParse({ ...params, kind });
	if (!address.success)
		return problem(400, "The address does not name a release, a measure, a crop and a kind of area");
	const { release, measure, crop } = address.data;
	const told = await findRelease(release);
	if (told?.withdrawn) return problem(410, "The figures of this release were withdrawn");
	const figures = await findMapFigures(release, measure, crop, address.data.kind);
	if (!figures) return problem(404, "No such figures have been released");
	return cachedJson(request, figuresBody(figures), "figures");
}
