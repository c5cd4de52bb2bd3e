import { type Kysely, sql } from "kysely";

// By which weights a survey's figures are made: frame size over answers by stratum, or calibrated to more of the frame.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.survey add column weighting text not null default 'design'
		constraint survey_weighting_known check (weighting in ('design', 'post_stratified', 'raked', 'linear'))`.execute(db);
}
