import { z } from "zod";
import type { Route } from "./+types/map-figures";
import { cachedJson, problem } from "#app/publish/cached-json.server.ts";
import { classWays } from "#app/publish/class-steps.ts";
import { figuresBody, findMapFigures } from "#app/publish/figures.server.ts";
import { findRelease } from "#app/publish/releases.server.ts";

const Address = z.object({
	release: z.coerce.number().int().positive().max(2_147_483_647),
	measure: z.string().regex(/^[a-z][a-z0-9_.]{0,79}$/),
	crop: z.string().regex(/^[a-z_]{1,40}$/),
	kind: z.enum(["county", "district"]).default("county"),
	beside: z.coerce.number().int().positive().max(2_147_483_647).optional(),
	classes: z.enum(classWays).default("natural"),
});

/** The figures of one map, read as the reader's role: nothing here can see further than what is released. */
export async function loader({ request, params }: Route.LoaderArgs) {
	const search = Object.fromEntries(new URL(request.url).searchParams);
	const address = Address.safeParse({ ...search, ...params });
	if (!address.success)
		return problem(400, "The address does not name a release, a measure, a crop and a kind of area");
	const { release, measure, crop, beside } = address.data;
	const told = await Promise.all([release, beside ?? release].map((number) => findRelease(number)));
	if (told.some((of) => of?.withdrawn)) return problem(410, "The figures of this release were withdrawn");
	const { kind, classes: way } = address.data;
	const figures = await findMapFigures(release, measure, crop, kind, { beside, way });
	if (!figures) return problem(404, "No such figures have been released");
	return cachedJson(request, figuresBody(figures), "figures");
}
