import type { Route } from "./+types/table-file";
import { requireResearcher } from "#app/auth/guard.server.ts";
import { recordDownload } from "#app/auth/research-access.server.ts";
import { wasTaken } from "#app/auth/taken-files.server.ts";
import { getInstance } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { matches } from "#app/publish/cached-json.server.ts";
import { inTurn } from "#app/publish/files/in-turn.server.ts";
import { makeFile, sha256 } from "#app/publish/files/make-files.server.ts";
import { readCatalogue } from "#app/publish/tables/catalogue.server.ts";
import { listTableRecords } from "#app/publish/tables/records.server.ts";
import { canBeTold, readSelection, wantedReleases, wantsRevisions } from "#app/publish/tables/selection.ts";
import { tableArchive, tableSource } from "#app/publish/tables/table-source.server.ts";

/** A table as a file, made when it is asked for out of released cells; each taking is recorded for each of its releases. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const researcher = requireResearcher(context);
	const { searchParams } = new URL(request.url);
	const catalogue = await readCatalogue(wantedReleases(searchParams), wantsRevisions(searchParams));
	const read = readSelection(searchParams, catalogue);
	// A file tells nobody that a part of what was asked for is left out, so there it is all or nothing.
	if (read.problems.length > 0 || !canBeTold(read)) throw refusal("form_not_understood");

	const records = await listTableRecords(catalogue, read.selection);
	if (records.length === 0) throw refusal("page_not_found");
	const instance = getInstance(context);
	const words = { en: instance.getFixedT("en", "dataroom"), es: instance.getFixedT("es", "dataroom") };
	const source = await tableSource({ catalogue, selection: read.selection, records }, words, env().BASE_URL);
	const file = await inTurn(() => makeFile(source, params.file === tableArchive ? `${source.name}.zip` : params.file));
	if (file === "busy") throw refusal("service_away");
	if (!file) throw refusal("page_not_found");

	const etag = `"${sha256(file.content)}"`;
	const headers = { etag, "cache-control": "private, max-age=300, no-transform" };
	if (matches(request.headers.get("if-none-match"), etag)) return new Response(null, { status: 304, headers });
	const name = file.name.endsWith(".zip") ? file.name : `${source.name}-${file.name}`;
	const response = new Response(request.method === "HEAD" ? null : (file.content as BodyInit), {
		headers: {
			...headers,
			"content-type": file.mediaType,
			"content-length": `${file.content.length}`,
			"content-disposition": `attachment; filename="${name}"`,
		},
	});
	const releaseIds = source.parts.map(({ release }) => release.releaseId);
	if (wasTaken(request, response)) await recordDownload(researcher, releaseIds, `table ${params.file}`);
	return response;
}
