import { z } from "zod";
import type { Route } from "./+types/cite";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { problem } from "#app/publish/cached-json.server.ts";
import { bibtex, ris } from "#app/publish/citation.ts";
import { ReleaseNumber } from "#app/publish/release-number.ts";
import { findRelease } from "#app/publish/releases.server.ts";

const Address = z.object({
	release: ReleaseNumber,
	format: z.enum(["bib", "ris"]),
});
const types = { bib: "application/x-bibtex; charset=utf-8", ris: "application/x-research-info-systems; charset=utf-8" };

/** A release's citation as a file. A withdrawn one has it too: who used it may have to name it. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const address = Address.safeParse({ release: params.release, format: params.citation.replace(/^citation\./, "") });
	if (!address.success) return problem(404, "A release's citation is at citation.bib or citation.ris");
	const { format } = address.data;
	const release = await findRelease(address.data.release);
	if (!release) return problem(404, "No such release");
	const cited = {
		network: getT(context, "public")("data.one.network"),
		title: wordsIn(release.title, getLanguage(context)),
		season: release.season,
		number: release.number,
		publishedAt: release.publishedAt,
		address: `${env().BASE_URL}/data/${release.number}`,
	};
	return new Response(format === "bib" ? bibtex(cited) : ris(cited), {
		headers: {
			"content-type": types[format],
			"content-disposition": `attachment; filename="tallygrove-release-${release.number}.${format}"`,
		},
	});
}
