import type { Route } from "./+types/file";
import { requireResearcher } from "#app/auth/guard.server.ts";
import { recordDownload } from "#app/auth/research-access.server.ts";
import { wasTaken } from "#app/auth/taken-files.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { ReleaseNumber } from "#app/publish/release-number.ts";
import { findRelease } from "#app/publish/releases.server.ts";
import { listFiles } from "#app/publish/release-files.server.ts";
import { savedName, serveFile } from "#app/publish/serve-file.server.ts";

/** A file of a release, for researchers; each taking is recorded, without a profile of the taker. */
export async function loader({ context, params, request }: Route.LoaderArgs) {
	const researcher = requireResearcher(context);
	const number = ReleaseNumber.safeParse(params.release);
	const release = number.success ? await findRelease(number.data) : undefined;
	if (!release) throw refusal("release_not_found");
	if (release.withdrawn) throw refusal("release_withdrawn");
	const files = await listFiles(release.releaseId);
	// Published a moment ago: the files come within a minute.
	if (files.length === 0) throw refusal("service_away");
	const file = files.find(({ name }) => name === params.file);
	if (!file) throw refusal("page_not_found");

	const name = savedName(release.number, file.name);
	const response = await serveFile(request, release.releaseId, file, { name, visibility: "private" });
	if (wasTaken(request, response)) await recordDownload(researcher, [release.releaseId], file.name);
	return response;
}
