import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { baseQuantities, quantityOf } from "#app/collect/base-quantities.ts";
import { FormDefinition } from "#app/collect/form.ts";
import { Weighting } from "#app/collect/weighting.ts";
import { listAreas } from "#app/directory/areas.server.ts";
import type { WeighedEstimates } from "#app/estimate/calibration/weighed-survey.ts";
import type { SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import { toldCrops } from "#app/lib/told-crops.ts";
import { Words } from "#app/lib/words.ts";
import { ALL_CROPS } from "#app/protect/codes.ts";
import { listHoldings } from "#app/protect/holdings.server.ts";
import type { Holding } from "#app/protect/holdings.ts";
import { listOwnerShares } from "#app/protect/owner-shares.server.ts";
import type { OwnerShares } from "#app/protect/owner-shares.ts";
import { cellKey } from "#app/protect/protect.ts";
import type { Edition } from "#app/protect/revision.ts";
import type { OtherSurvey } from "#app/protect/shared-cells.ts";
import { type ReleaseMethod, ReleaseRules } from "#app/release/draft.ts";
import { listFrameStrata, listTallies } from "#app/tally/tally.server.ts";
import { listEarlierEditions } from "./draft-basis.server.ts";
import { listOtherSurveys } from "./draft-other-surveys.server.ts";
import { estimateByWeights } from "./weighed-estimates.server.ts";
import { type SensitiveMeasures, sensitiveMeasures } from "./sensitive-measures.ts";

export type DraftInputs = {
	rules: ReleaseRules;
	method: Omit<ReleaseMethod, "joins" | "calibrations">;
	weighed: WeighedEstimates;
	frameCells: ReadonlySet<string>;
	baseKeys: string[];
	sensitive: SensitiveMeasures;
	/** What the quantities of the table are called, by key; counts of answers have no name of their own. */
	quantityLabels: ReadonlyMap<string, Words>;
	shares: OwnerShares[];
	holdings: Holding[];
	/** Releases of the survey so far; a first one has none. */
	earlier: Edition[];
	/** Releases of other surveys of the season that asked some of the same. */
	others: OtherSurvey[];
	/** Every release of another survey of the season, whether it asked the same or not. */
	heldAgainst: string[];
};

/** What a draft that waits to be computed is made of, or undefined when it no longer waits. */
export async function readInputs(trx: Trx, releaseDraftId: string): Promise<DraftInputs | undefined> {
	const row = await trx
		.selectFrom("collect.release_draft as d")
		.innerJoin("collect.survey as s", "s.survey_id", "d.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.select([
			"d.rules",
			"s.survey_id",
			"s.season",
			"s.title",
			"s.crop_keys",
			"s.weighting",
			"s.opened_at",
			"s.closed_at",
			"s.closes_at",
			"v.definition",
		])
		.where("d.release_draft_id", "=", releaseDraftId)
		.where("d.status", "in", ["queued", "failed"])
		.executeTakeFirst();
	if (!row) return undefined;
	const definition = FormDefinition.parse(row.definition);
	const surveyId = row.survey_id;
	const baseKeys = baseQuantities(definition);
	const rules = ReleaseRules.parse(row.rules);
	const sensitive = sensitiveMeasures(definition);
	const states = await countResponses(trx, surveyId);
	const tallies = await listTallies(trx, surveyId);
	const surveyStates = new Set(states.map((state) => state.stateFips));
	const areas = (await listReleasedAreas(trx, surveyId)) ?? (await listAreasOf(trx, surveyStates));
	const measures = definition.measures
		.filter((measure) => !measure.base)
		.map((measure) => ({ ...measure, crops: toldCrops(measure, definition.screens, row.crop_keys) }));
	const cropsOf = new Map(measures.map(({ key, crops }) => [key, crops]));
	const frame = await listFrameStrata(trx, surveyId);
	const weighting = Weighting.parse(row.weighting);
	const total = (key: "asked" | "answered") => states.reduce((sum, state) => sum + state[key], 0);
	return {
		rules,
		method: {
			formKey: definition.key,
			season: row.season,
			title: Words.parse(row.title),
			openedAt: (row.opened_at ?? row.closes_at).toISOString(),
			closedAt: (row.closed_at ?? row.closes_at).toISOString(),
			all: { asked: total("asked"), answered: total("answered") },
			states,
			setAside: tallies.reduce((sum, tally) => sum + tally.setAside, 0),
			weighting,
			measures,
			areas,
			cropKeys: row.crop_keys,
		},
		weighed: await estimateByWeights(trx, {
			surveyId,
			weighting,
			measures,
			frame,
			tallies: tallies.filter(
				({ measureKey, cropKey }) => cropKey === ALL_CROPS || cropsOf.get(measureKey)?.includes(cropKey),
			),
			areasOfCounty: areasOfCounty(areas),
			districtOf: districtsOf(areas),
			cutOffs: cutOffsOf(rules),
		}),
		frameCells: await listFrameCells(trx, surveyId),
		baseKeys,
		sensitive,
		quantityLabels: new Map(definition.measures.map(({ key, label }) => [quantityOf(key), label])),
		shares: await listOwnerShares(trx, {
			surveyId,
			baseKeys,
			sensitiveKeys: sensitive.all,
			countedKeys: sensitive.counted,
			largestOwners: rules.largest?.owners,
			districtOf: districtsOf(areas),
		}),
		holdings: await listHoldings(trx, surveyId, { baseKeys, countedKeys: sensitive.counted }),
		earlier: await listEarlierEditions(trx, surveyId),
		...(await listOtherSurveys(trx, surveyId, definition)),
	};
}

type Areas = ReleaseMethod["areas"];

async function listAreasOf(trx: Trx, stateFips: ReadonlySet<string>): Promise<Areas> {
	return (await listAreas(trx))
		.filter((area) => area.stateFips === null || stateFips.has(area.stateFips))
		.map(({ key, kind, parentKey, stateFips: state, name }) => ({
			areaKey: key,
			kind,
			parentKey,
			stateFips: state,
			name,
		}));
}

/**
 * A revision tells of the same areas as the release before it, though districts were redrawn since: two ways of grouping the
 * same counties would let one be worked out from the other.
 */
async function listReleasedAreas(trx: Trx, surveyId: string): Promise<Areas | undefined> {
	const rows = await trx
		.selectFrom("release.area as a")
		.select(["a.area_key", "a.kind", "a.parent_key", "a.state_fips", "a.name"])
		.where("a.release_id", "=", (eb) =>
			eb
				.selectFrom("release.release")
				.select("release_id")
				.where("series_id", "=", surveyId)
				.orderBy("edition", "desc")
				.limit(1),
		)
		.orderBy("a.area_key")
		.execute();
	if (rows.length === 0) return undefined;
	return rows.map((row) => ({
		areaKey: row.area_key,
		kind: row.kind as Areas[number]["kind"],
		parentKey: row.parent_key,
		stateFips: row.state_fips,
		name: row.name,
	}));
}

function districtsOf(areas: Areas): Map<string, string | null> {
	const districts = new Set(areas.filter(({ kind }) => kind === "district").map(({ areaKey }) => areaKey));
	const counties = areas.filter(({ kind }) => kind === "county");
	return new Map(
		counties.map(({ areaKey, parentKey }) => [areaKey, parentKey && districts.has(parentKey) ? parentKey : null]),
	);
}

function areasOfCounty(areas: Areas): Map<string, string[]> {
	const parentOf = new Map(areas.map((area) => [area.areaKey, area.parentKey]));
	const pathOf = (areaKey: string): string[] => {
		const parent = parentOf.get(areaKey);
		return parent ? [areaKey, ...pathOf(parent)] : [areaKey];
	};
	return new Map(areas.filter((area) => area.kind === "county").map((area) => [area.areaKey, pathOf(area.areaKey)]));
}

function cutOffsOf({ steadyCv: steady, careCv: care, steadyDays, careDays }: ReleaseRules): SteadinessCutOffs {
	return { steady, care, steadyDays, careDays };
}

/** Who was asked and who answered. Answers begun and never sent in are in no figure, so they count as none. */
async function countResponses(trx: Trx, surveyId: string): Promise<ReleaseMethod["states"]> {
	const { rows } = await sql<{ stateFips: string; asked: number; answered: number }>`
		select state_fips as "stateFips", count(*)::int as asked,
			(count(*) filter (where disposition = 'complete'))::int as answered
		from collect.frame_operation where survey_id = ${surveyId} group by state_fips order by state_fips`.execute(trx);
	return rows;
}

/** Which cells of the frame have growers at all, as `area|crop`: where none is asked, none answers. */
async function listFrameCells(trx: Trx, surveyId: string): Promise<Set<string>> {
	const { rows } = await sql<{ county_fips: string; crop_key: string }>`
		select distinct o.county_fips, c.crop_key
		from collect.frame_crop c join collect.frame_operation o using (survey_id, operation_id)
		where c.survey_id = ${surveyId}`.execute(trx);
	return new Set(rows.flatMap((row) => [cellKey(row.county_fips, row.crop_key), cellKey(row.county_fips, ALL_CROPS)]));
}
