import type { Route } from "./+types/file";
import { requireResearcher } from "#app/auth/guard.server.ts";
import { recordDownload } from "#app/auth/research-access.server.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { codebookCsv } from "#app/publish/codebook.ts";
import { listDataRows } from "#app/publish/data-file.server.ts";
import { cellsCsv } from "#app/publish/data-file.ts";
import { findRelease, listMeasures } from "#app/publish/releases.server.ts";

const files = ["cells.csv", "codebook.csv"] as const;

/** A file of a release, for researchers; each taking is recorded, without a profile of the taker. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const researcher = requireResearcher(context);
	const file = files.find((name) => name === params.file);
	const release = /^\d{1,9}$/.test(params.release) ? await findRelease(Number(params.release)) : undefined;
	if (!file || !release) throw refusal("release_not_found");
	if (release.withdrawn) throw refusal("release_withdrawn");

	const language = getLanguage(context);
	const body =
		file === "cells.csv"
			? cellsCsv(release, await listDataRows(release.releaseId))
			: codebookCsv(await listMeasures(release.releaseId), language, getT(context, "dataroom"));
	await recordDownload(researcher, release.releaseId, file);
	return new Response(body, {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": `attachment; filename="tallygrove-release-${release.number}-${file}"`,
			"content-language": file === "codebook.csv" ? language : "en",
		},
	});
}
