import { type Kysely, sql } from "kysely";

// Measures of days: the median is the figure's value, and its quartiles stand beside it.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table release.measure
		drop constraint measure_kind_check,
		add constraint measure_kind_check check (kind in ('ratio', 'mean', 'total', 'proportion', 'day'))`.execute(db);
	await sql`alter table release.figure
		add column first_quartile double precision,
		add column third_quartile double precision,
		add constraint figure_quartiles_whole check (num_nonnulls(first_quartile, third_quartile) in (0, 2)),
		drop constraint figure_rough_has_no_number,
		add constraint figure_rough_has_no_number check (steadiness <> 'rough' or num_nonnulls(
			value, standard_error, cv, lower_bound, upper_bound, first_quartile, third_quartile) = 0)`.execute(db);
}
