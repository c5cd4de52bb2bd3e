import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { FormDefinition } from "#app/collect/form.ts";
import type { DistrictNames } from "#app/directory/districts.ts";
import type { StateDistricts } from "#app/directory/districts.server.ts";
import { readNetworkRules } from "#app/jobs/network-rules.server.ts";
import { sensitiveMeasures } from "#app/jobs/sensitive-measures.ts";
import { Words } from "#app/lib/words.ts";
import type { DistrictInput } from "#app/protect/districts.ts";
import { listHoldings } from "#app/protect/holdings.server.ts";
import { surveyQuantities } from "#app/protect/survey-table.ts";

/** Surveys by whose answers districts of a state can be judged, the latest first. */
export async function listSurveysOfState(trx: Trx, viewer: Associate, stateFips: string) {
	const rows = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.survey_state as ss", "ss.survey_id", "s.survey_id")
		.select(["s.survey_id", "s.season", "s.title"])
		.where("ss.state_fips", "=", stateFips)
		.where("ss.state_fips", "in", viewer.stateFips)
		.where("s.opened_at", "is not", null)
		.orderBy("s.opened_at", "desc")
		.orderBy("s.survey_id")
		.limit(40)
		.execute();
	return rows.map((row) => ({ surveyId: row.survey_id, season: row.season, title: Words.parse(row.title) }));
}

/** What a grouping of a state's counties is judged by: the answers of one survey, under the rules that hold today. */
export async function readGroupingInput(
	trx: Trx,
	surveyId: string,
	state: StateDistricts,
	names: DistrictNames,
): Promise<DistrictInput> {
	const { definition } = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select("v.definition")
		.where("s.survey_id", "=", surveyId)
		.executeTakeFirstOrThrow();
	const form = FormDefinition.parse(definition);
	const baseKeys = form.measures.flatMap(({ base, key }) => (base ? key.replace(/^base\./, "") : []));
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
