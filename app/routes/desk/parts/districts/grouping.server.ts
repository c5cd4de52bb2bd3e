import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { baseQuantities } from "#app/collect/base-quantities.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { listSurveys } from "#app/collect/surveys.server.ts";
import type { DistrictNames } from "#app/directory/districts.ts";
import type { StateDistricts } from "#app/directory/districts.server.ts";
import { readNetworkRules } from "#app/jobs/network-rules.server.ts";
import { sensitiveMeasures } from "#app/jobs/sensitive-measures.ts";
import type { DistrictInput } from "#app/protect/districts.ts";
import { listHoldings } from "#app/protect/holdings.server.ts";
import { surveyQuantities } from "#app/protect/survey-table.ts";

/** The surveys by which a grouping can be judged, the one chosen or else the first of them, and what its answers say. */
export async function readJudgedBy(
	trx: Trx,
	viewer: Associate,
	chosenId: string,
	{ state, names }: { state: StateDistricts; names: DistrictNames },
) {
	const surveys = await listSurveysOfState(trx, viewer, state.stateFips);
	const survey = surveys.find(({ surveyId }) => surveyId === chosenId) ?? surveys[0];
	return { surveys, survey, input: survey && (await readGroupingInput(trx, survey.surveyId, state, names)) };
}

/** Surveys by whose answers districts of a state can be judged, the latest first. */
async function listSurveysOfState(trx: Trx, viewer: Associate, stateFips: string) {
	const surveys = await listSurveys(trx, viewer);
	return surveys.filter((survey) => survey.state !== "draft" && survey.stateFips.includes(stateFips));
}

/** What a grouping of a state's counties is judged by: the answers of one survey, under the rules that hold today. */
async function readGroupingInput(
	trx: Trx,
	surveyId: string,
	state: StateDistricts,
	names: DistrictNames,
): Promise<DistrictInput | undefined> {
	const form = await findSurveyForm(trx, surveyId);
	if (!form) return undefined;
	const baseKeys = baseQuantities(form);
	const { counted } = sensitiveMeasures(form);
	const here = new Set(state.counties.map(({ countyFips }) => countyFips));
	const holdings = await listHoldings(trx, surveyId, { baseKeys, countedKeys: counted });
	return {
		counties: state.counties.map(({ countyFips }) => ({
			areaKey: countyFips,
			group: names.get(countyFips) ?? countyFips,
		})),
		neighborsOf: state.neighborsOf,
		holdings: holdings.filter(({ areaKey }) => here.has(areaKey)),
		quantities: surveyQuantities(baseKeys, counted).map(({ key }) => key),
		rules: await readNetworkRules(trx),
	};
}
