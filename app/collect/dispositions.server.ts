import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { SizeClass } from "./frame.ts";
import type { Disposition } from "./frame-list.server.ts";

export type DispositionCount = { disposition: Disposition; operations: number; bearingTrees: number };

const counts = [
	sql<number>`sum(operations)::int`.as("operations"),
	sql<number>`sum(bearing_trees)::float8`.as("bearingTrees"),
] as const;

/** Says anew what became of an operation in a survey. The caller holds its row, and has seen that it is another disposition. */
export async function setDisposition(
	trx: Trx,
	{ surveyId, operationId }: { surveyId: string; operationId: string },
	disposition: Disposition,
): Promise<void> {
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition, disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.execute();
}

/**
 * What became of a survey's operations with a crop, in counties of the viewer's states: how many, and the bearing trees that
 * they had when the frame was frozen. Crop `all` counts each operation once, with the trees of all the survey's crops.
 */
export async function countDispositions(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ cropKey, countyFips }: { cropKey: string; countyFips: readonly string[] },
): Promise<DispositionCount[]> {
	if (countyFips.length === 0) return [];
	const rows = await trx
		.selectFrom("collect.frame_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", cropKey)
		.where("state_fips", "in", viewer.stateFips)
		.where("county_fips", "in", countyFips)
		.where("operations", ">", 0)
		.groupBy("disposition")
		.orderBy("disposition")
		.select(["disposition", ...counts])
		.execute();
	return rows.map((row) => ({ ...row, disposition: row.disposition as Disposition }));
}

/** Operations of one state, district and stratum that share a disposition; several such rows make any larger part. */
export type OutcomeRow = DispositionCount & {
	stateFips: string;
	/** Null for counties of no district. */
	districtKey: string | null;
	districtName: string | null;
	sizeClass: SizeClass;
};

/**
 * What became of all operations of a survey's frame in the viewer's states, by state, district and size class: some hundreds
 * of rows, from which any part is summed. The district is that of the frozen county.
 */
export async function listOutcomes(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	cropKey: string,
): Promise<OutcomeRow[]> {
	return trx
		.selectFrom("collect.frame_count as f")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.leftJoin("directory.district as d", "d.district_key", "c.district_key")
		.where("f.survey_id", "=", surveyId)
		.where("f.crop_key", "=", cropKey)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.operations", ">", 0)
		.groupBy(["f.state_fips", "c.district_key", "d.name", "f.size_class", "f.disposition"])
		.orderBy("f.state_fips")
		.orderBy("d.name")
		.orderBy(sql`array_position(array['small', 'medium', 'large'], f.size_class)`)
		.orderBy("f.disposition")
		.select(["f.state_fips as stateFips", "c.district_key as districtKey", "d.name as districtName"])
		.select([
			sql<SizeClass>`f.size_class`.as("sizeClass"),
			sql<Disposition>`f.disposition`.as("disposition"),
			...counts,
		])
		.execute();
}
