import type { Route } from "./+types/map-file";
import { isLanguage, type Language } from "#app/i18n/language.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { pngOfSvg } from "#app/lib/png-of-svg.server.ts";
import { entityTag, keptLikeFigures, problem, unlessKept } from "#app/publish/cached-json.server.ts";
import { recordsCsv } from "#app/publish/data-file.ts";
import { readMapQuery } from "#app/publish/map-choice.ts";
import { findMapView, isView, listWholeFigures, type MapView } from "#app/publish/map-view.server.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { listViewRecords } from "#app/publish/view-rows.server.ts";
import { viewSvg } from "./parts/view-svg.server.tsx";

const types = {
	"map.svg": "image/svg+xml; charset=utf-8",
	"map.png": "image/png",
	"map.csv": "text/csv; charset=utf-8; header=present",
} as const;
type MapFile = keyof typeof types;
const isMapFile = (name: string): name is MapFile => name in types;

/**
 * A view of the map as a picture or as data, under the page's own address with another name: everything is read as the
 * reader's role. What the page would say it shows instead, a file cannot say, so it is not found.
 */
export async function loader({ request, params, context }: Route.LoaderArgs) {
	if (!isMapFile(params.file)) return problem(404, "A view of the map is at map.svg, map.png or map.csv");
	const view = await findMapView(readMapQuery(request.url));
	if (typeof view === "object" && "withdrawn" in view)
		return problem(410, "The figures of this release were withdrawn");
	if (!isView(view) || view.changed || view.besideMissing) return problem(404, "No such figures have been released");
	const wanted = new URL(request.url).searchParams.get("lang");
	const language = isLanguage(wanted) ? wanted : getLanguage(context);
	return params.file === "map.csv" ? csvOf(request, view) : pictureFile(request, params.file, view, language);
}

async function csvOf(request: Request, view: MapView): Promise<Response> {
	const body = recordsCsv(await listViewRecords(view));
	const headers = headersOf("map.csv", view, "attachment");
	return unlessKept(request, entityTag(body), headers) ?? answer(body, entityTag(body), headers);
}

async function pictureFile(request: Request, file: MapFile, view: MapView, language: Language): Promise<Response> {
	const picture = pictureOf(view.states, view.state);
	if (!picture) return problem(404, "No such figures have been released");
	const { figures, pair, state } = view;
	const wholes = await listWholeFigures(view);
	const svg = await viewSvg({ shown: pair ?? [figures], state, wholes, picture, baseUrl: env().BASE_URL }, language);
	// A picture is made from its drawing alone: who has that version need not have it drawn again.
	const etag = entityTag(`${file} ${svg}`);
	const headers = { ...headersOf(file, view, "inline"), "content-language": language, vary: "cookie, accept-language" };
	const kept = unlessKept(request, etag, headers);
	if (kept) return kept;
	return answer(file === "map.svg" ? svg : new Uint8Array(await pngOfSvg(svg)), etag, headers);
}

const answer = (body: BodyInit, etag: string, headers: Record<string, string>) =>
	new Response(body, { headers: { ...headers, etag } });

function headersOf(file: MapFile, { figures, pair, state }: MapView, disposition: string): Record<string, string> {
	const releases = (pair ?? [figures]).map(({ release }) => release.number).join("-and-");
	const name = [figures.measure.key, figures.cropKey, `release-${releases}`, ...(state ? [state] : [])].join("-");
	return {
		...keptLikeFigures,
		"content-type": types[file],
		"content-disposition": `${disposition}; filename="tallygrove-${name}${file.slice(3)}"`,
		// A drawing opened by itself brings its own few styles, and runs nothing.
		"content-security-policy": "default-src 'none'; style-src 'unsafe-inline'; sandbox",
	};
}
