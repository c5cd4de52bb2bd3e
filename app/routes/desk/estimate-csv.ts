import type { Route } from "./+types/estimate-csv";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { figureOriginCsv } from "./parts/estimates/figure-origin-csv.ts";
import { requireFigureOrigin } from "./parts/estimates/figure-origin.server.ts";

/** Every number behind one draft figure, as a file for associates of its states. */
export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const told = await requireFigureOrigin(desk, params);
	const name = ["draft", told.measure.key, told.cropKey, told.area.key].join("-").replace(/[^a-z0-9_.-]/gi, "_");
	return new Response(figureOriginCsv(told), {
		headers: {
			"content-type": "text/csv; charset=utf-8; header=present",
			"content-disposition": `attachment; filename="${name}.csv"`,
			"content-language": "en",
		},
	});
}
