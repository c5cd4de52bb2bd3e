import type { Access } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countDispositions } from "#app/collect/dispositions.server.ts";
import { unitOfQuantity } from "#app/collect/quantity-unit.ts";
import { frameResponse } from "#app/estimate/response-rate.ts";
import { readWeighing } from "#app/jobs/weighed-estimates.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import { measuresOf, readDraftInputs } from "./draft-estimates.server.ts";
import { originOf } from "./figure-origin.ts";
import { weighedOriginOf } from "./weighed-origin.ts";
import { readFigureSeasons } from "./figure-seasons.server.ts";

export type FigurePlace = { surveyId: string; areaKey: string; cropKey: string; measureKey: string };
export type ToldFigure = NonNullable<Awaited<ReturnType<typeof findFigureOrigin>>>;

/** @returns undefined for a survey, area, crop or measure that there is not, or that is not of the viewer's states. */
export async function findFigureOrigin(trx: Trx, viewer: Associate, place: FigurePlace) {
	const { surveyId, areaKey, cropKey, measureKey } = place;
	const inputs = await readDraftInputs(trx, viewer, surveyId);
	const area = inputs?.areas.find((one) => one.key === areaKey);
	const crops = ["all", ...(inputs?.survey.cropKeys ?? [])];
	const measure = inputs && measuresOf(inputs, cropKey).find((one) => one.key === measureKey);
	if (!area || !measure || !crops.includes(cropKey)) return undefined;
	const countyFips = [...inputs.areasOfCounty].flatMap(([county, path]) => (path.includes(areaKey) ? [county] : []));
	const dispositions = await countDispositions(trx, viewer, surveyId, { cropKey, countyFips });
	const { key, label, description, kind, unit, decimals } = measure;
	return {
		survey: { title: inputs.survey.title, season: inputs.survey.season, statesNotHeld: inputs.survey.statesNotHeld },
		area: { key: area.key, kind: area.kind, name: area.name, stateFips: area.stateFips },
		cropKey,
		measure: { key, label, description, kind, unit, decimals, season: inputs.survey.season },
		/** Of the sums above and below the line. */
		units: {
			y: unitOfQuantity(measure.numerator, inputs.definition),
			x: measure.denominator && unitOfQuantity(measure.denominator, inputs.definition),
		},
		weighting: inputs.weighting,
		frameStrata: inputs.frame.flatMap(({ cropKey: crop, stratumKey, stateFips, sizeClass }) =>
			crop === cropKey ? [{ stratumKey, stateFips, sizeClass }] : [],
		),
		districts: inputs.areas.flatMap((one) => (one.kind === "district" ? [{ key: one.key, name: one.name }] : [])),
		origin:
			inputs.weighting === "design"
				? originOf(inputs, { areaKey, cropKey, measure })
				: weighedOriginOf(
						{ ...inputs, ...(await readWeighing(trx, inputs, { measureKey, cropKey })) },
						{ areaKey, cropKey, measure },
					),
		seasons: await readFigureSeasons(trx, viewer, inputs, { areaKey, cropKey, measure }),
		dispositions,
		response: frameResponse(dispositions),
	};
}

/** The same for a page or a file of its own. @throws refusal 404 */
export async function requireFigureOrigin(desk: Access<Associate>, place: FigurePlace): Promise<ToldFigure> {
	const found = await desk.transaction((trx) => findFigureOrigin(trx, desk.viewer, place));
	if (!found) throw refusal("page_not_found");
	return found;
}
