import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { addOperation, asDesk, draftOf } from "./surveys-fixture.ts";

/** Owners by county of Iowa. Every operation answers, so that each estimate can be had by hand: weights are 1. */
export const countyOwners = { "19001": 8, "19003": 7, "19005": 2, "19007": 6 } as const;
/** What the i-th operation of a county told, in pounds. */
export const normalOf = (i: number) => 1000 + 10 * i;
export const harvestedOf = (i: number) => 300 + 25 * i;
const normalSql = "(1000 + 10 * i)";
const harvestedSql = "(300 + 25 * i)";

/** An open survey of apples in four counties of Iowa, with its facts; the counties are put into one district. */
export async function addAnsweredSurvey(owner: Client, associate: Associate): Promise<string> {
	await owner.query(`insert into directory.district values ('IA-T', '19', 'Test Iowa') on conflict do nothing`);
	await owner.query("update directory.operation set status = 'left'");
	for (const [fips, owners] of Object.entries(countyOwners)) {
		await owner.query(
			`insert into directory.county (county_fips, state_fips, district_key, name) values ($1, '19', 'IA-T', $2)
			on conflict (county_fips) do update set district_key = 'IA-T'`,
			[fips, `County ${fips}`],
		);
		for (let i = 0; i < owners; i++) {
			const operationId = await addOperation(owner, { state: "19", name: `Orchard ${fips} ${i}`, email: null });
			await owner.query("update directory.operation set county_fips = $1 where operation_id = $2", [fips, operationId]);
		}
	}
	const made = await asDesk(associate, (trx) => createSurvey(trx, associate, draftOf(["19"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(associate, (trx) => openSurvey(trx, associate, surveyId));
	await owner.query(`update collect.frame_operation set disposition = 'complete' where survey_id = $1`, [surveyId]);
	for (const crop of ["apple", "all"]) await insertFacts(owner, surveyId, crop);
	return surveyId;
}

async function insertFacts(owner: Client, surveyId: string, crop: string) {
	const place = `row_number() over (partition by f.county_fips order by o.name) - 1`;
	for (const [measure, y, x] of [
		["crop_loss", `${normalSql} - ${harvestedSql}`, normalSql],
		["base.bearing_trees", "40", "1"],
		["base.normal_crop_lb", normalSql, "1"],
		["base.harvested_lb", harvestedSql, "1"],
	] as const) {
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key, y, x)
			select survey_id, $2, $3, operation_id, owner_id, county_fips, state_fips, stratum_key, ${y}, ${x} from (
				select f.*, ${place} as i from collect.frame_operation f join directory.operation o using (operation_id)
				where f.survey_id = $1) s`,
			[surveyId, measure, crop],
		);
	}
}
