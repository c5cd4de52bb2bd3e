import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { type Area, listAreas, regionKey } from "#app/directory/areas.server.ts";
import type { AreasOfCounty } from "#app/estimate/survey.ts";
import { estimateByWeights } from "#app/jobs/weighed-estimates.server.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { pageOf } from "#app/lib/page-of.ts";
import { toldCrops } from "#app/lib/told-crops.ts";
import { isAnyTallied, listFrameStrata, listTallies } from "#app/tally/tally.server.ts";
import { barScales, chooseRows, sortRows } from "./estimate-rows.ts";
import { type EstimatesQuery, figureSorts } from "./estimates.schema.ts";

/**
 * All that draft figures of a survey are made from, as far as the viewer's states go. The region, where the viewer holds
 * several states, is those states together and no more.
 * @returns undefined for a survey that asks in none of the viewer's states.
 */
export async function readDraftInputs(trx: Trx, viewer: Associate, surveyId: string) {
	const basis = await readDraftBasis(trx, viewer, surveyId);
	return basis && { ...basis, tallies: await listTallies(trx, surveyId) };
}
export type DraftInputs = NonNullable<Awaited<ReturnType<typeof readDraftInputs>>>;

/** The same without the tallies, which are most of it. */
async function readDraftBasis(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	const held = survey.stateFips.filter((state) => viewer.stateFips.includes(state));
	const branches = await listAreas(trx, held);
	const region: Area = { key: regionKey, kind: "region", parentKey: null, stateFips: null, name: "", label: "" };
	return {
		survey,
		surveyId,
		weighting: survey.weighting,
		definition,
		held,
		measures: definition.measures
			.filter((measure) => !measure.base)
			.map((measure) => ({ ...measure, crops: toldCrops(measure, definition.screens, survey.cropKeys) })),
		areas: held.length > 1 ? [region, ...inTreeOrder(branches)] : inTreeOrder(branches),
		areasOfCounty: pathsOfCounties(branches),
		districtOf: districtsOfCounties(branches),
		frame: await listFrameStrata(trx, surveyId),
	};
}
type DraftBasis = NonNullable<Awaited<ReturnType<typeof readDraftBasis>>>;

/** The measures that are told of a crop. */
export function measuresOf(inputs: Pick<DraftInputs, "measures">, cropKey: string): DraftInputs["measures"] {
	return inputs.measures.filter((measure) =>
		cropKey === "all" ? measure.acrossCrops : measure.crops.includes(cropKey),
	);
}

/** The table of a survey's draft figures: what is chosen, sorted, one page of it. */
export async function listDraftEstimates(trx: Trx, viewer: Associate, surveyId: string, asked: EstimatesQuery) {
	const inputs = await readDraftBasis(trx, viewer, surveyId);
	if (!inputs) return undefined;
	const { survey, held, areas } = inputs;
	const crops = [...(inputs.measures.some((measure) => measure.acrossCrops) ? ["all"] : []), ...survey.cropKeys];
	const query = settle(asked, inputs, crops);
	const choices = measuresOf(inputs, query.crop);
	const measures = choices.filter((measure) => query.measure === "all" || measure.key === query.measure);
	const measureKeys = measures.map(({ key }) => key);
	const tallies = await listTallies(trx, surveyId, { measureKeys, cropKey: query.crop });
	const { estimates, calibrations } = await estimateByWeights(trx, { ...inputs, measures, tallies });
	const rows = chooseRows(areas, estimates, query);
	return {
		query,
		crops,
		states: held,
		measureChoices: choices.map(({ key, label }) => ({ key, label })),
		measures: measures.map(({ key, label, unit, decimals }) => ({ key, label, unit, decimals, season: survey.season })),
		scales: barScales(rows, measures),
		weighting: survey.weighting,
		designKept: calibrations.filter(({ fallback }) => fallback !== null).length,
		statesNotHeld: survey.statesNotHeld,
		isClosed: survey.state === "closed",
		anyAnswer: tallies.some((tally) => tally.n > 0) || (await isAnyTallied(trx, surveyId)),
		...pageOf(sortRows(rows, query), query.page),
	};
}

/** What the address asks for and the survey has not falls back to everything. */
function settle(asked: EstimatesQuery, inputs: DraftBasis, crops: string[]): EstimatesQuery {
	const crop = crops.includes(asked.crop) ? asked.crop : (crops[0] ?? "all");
	const keys = measuresOf(inputs, crop).map(({ key }) => key);
	const measure = keys.includes(asked.measure) ? asked.measure : "all";
	const sorts = ["area", "respondents", ...(measure === "all" ? keys : figureSorts)];
	return {
		...asked,
		crop,
		measure,
		state: inputs.held.includes(asked.state) ? asked.state : "all",
		sort: sorts.includes(asked.sort) ? asked.sort : "area",
	};
}

/** Each state, then each of its districts with its counties below it, then counties of no district. */
function inTreeOrder(areas: readonly Area[]): Area[] {
	const below = groupBy(areas, (area) => area.parentKey);
	const under = (key: string): Area[] => (below.get(key) ?? []).flatMap((area) => [area, ...under(area.key)]);
	return under(regionKey);
}

function pathsOfCounties(areas: readonly Area[]): AreasOfCounty {
	const parentOf = new Map(areas.map((area) => [area.key, area.parentKey]));
	const pathOf = (key: string): string[] => {
		const parent = parentOf.get(key);
		return parent ? [key, ...pathOf(parent)] : [key];
	};
	return new Map(areas.filter((area) => area.kind === "county").map((area) => [area.key, pathOf(area.key)]));
}

/** A county's district is the area right above it, where that is no state. */
function districtsOfCounties(areas: readonly Area[]): Map<string, string | null> {
	const counties = areas.filter((area) => area.kind === "county");
	return new Map(counties.map(({ key, parentKey, stateFips }) => [key, parentKey === stateFips ? null : parentKey]));
}
