import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { addOperation, asDesk, draftOf } from "./surveys-fixture.ts";

export type Told = { state?: "19" | "55"; county?: string; trees?: number; y?: number; x?: number; setAside?: boolean };

/** A survey of apples that is out: an operation for each, those with a y having answered about their crop loss. */
export async function surveyOf(owner: Client, both: Associate, states: string[], told: Told[]): Promise<string> {
	const operations: (Told & { operationId: string })[] = [];
	for (const one of told) {
		const operationId = await addOperation(owner, { state: one.state ?? "19", trees: one.trees ?? 40 });
		if (one.county)
			await owner.query("update directory.operation set county_fips = $2 where operation_id = $1", [
				operationId,
				one.county,
			]);
		operations.push({ ...one, operationId });
	}
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(states)));
	const { surveyId } = made as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	for (const { operationId, y, x, setAside } of operations.filter((one) => one.x !== undefined)) {
		await owner.query(
			`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips,
				stratum_key, y, x, set_aside)
			select survey_id, 'crop_loss', 'apple', operation_id, owner_id, county_fips, state_fips, stratum_key, $3, $4, $5
			from collect.frame_operation where survey_id = $1 and operation_id = $2`,
			[surveyId, operationId, y ?? null, y === undefined ? null : x, setAside ?? false],
		);
		await owner.query(
			"update collect.frame_operation set disposition = 'complete' where survey_id = $1 and operation_id = $2",
			[surveyId, operationId],
		);
	}
	return surveyId;
}

/** Six small operations and three large ones of Iowa; one large one answered, from the other county. */
export const iowaTold: Told[] = [
	{ y: 10, x: 100 },
	{ y: 30, x: 100 },
	{ y: 20, x: 200 },
	{ y: 90, x: 100, setAside: true },
	{ x: 1 },
	{},
	{ county: "19113", trees: 2000, y: 500, x: 1000 },
	{ trees: 2000 },
	{ trees: 2000 },
];
export const wisconsinTold: Told[] = [
	{ state: "55", y: 0, x: 100 },
	{ state: "55", y: 50, x: 100 },
];
