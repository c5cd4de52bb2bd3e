import { href } from "react-router";
import type { Route } from "./+types/my-data";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { readMyData } from "#app/collect/my-data.server.ts";
import { env } from "#app/lib/env.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { myDataCsv } from "./parts/my-data-csv.ts";

const types: Record<string, string> = {
	"my-data.json": "application/json; charset=utf-8",
	"my-data.csv": "text/csv; charset=utf-8; header=present",
};

/** All that is kept about a grower's operations, to take away. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const type = Object.hasOwn(types, params.file) ? types[params.file] : undefined;
	if (!type) throw refusal("page_not_found");
	const operations = await grower.transaction((trx) => readMyData(trx, grower.viewer, photoAddress));
	const { displayName, email, language } = grower.viewer.person ?? { displayName: null, email: null, language: null };
	const body =
		params.file === "my-data.csv"
			? myDataCsv(operations)
			: JSON.stringify({ account: { display_name: displayName, email, language }, operations }, null, "\t");
	return new Response(body, {
		headers: {
			"content-type": type,
			"content-disposition": `attachment; filename="tallygrove-${params.file}"`,
			"cache-control": "private, no-store",
		},
	});
}

/** Opens for the grower alone, when signed in. */
function photoAddress(photo: { surveyId: string; operationId: string; photoId: string }): string {
	return env().BASE_URL + href("/orchard/:operationId/answers/:surveyId/photos/:photoId", photo);
}
