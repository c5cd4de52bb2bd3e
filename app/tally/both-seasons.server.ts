import { sql, type Transaction } from "kysely";
import { addPairedMoments, emptyPairedMoments, type PairedMoments } from "#app/lib/paired-moments.ts";
import type { DB } from "#db/schema.ts";

export type SeasonPair = {
	before: string;
	now: string;
	measureKey: string;
	/** A crop, or `all`. */
	cropKey: string;
};

export type SeasonsTogether = {
	/** Operations on both frames, by stratum. */
	frame: Map<string, number>;
	/** Those that answered the measure both times, by stratum. */
	respondents: Map<string, number>;
	/** Paired moments of those by stratum and county. */
	pairs: (PairedMoments & { stratumKey: string; countyFips: string })[];
};

/**
 * What operations that were asked in two surveys told in both, in one pass over their facts. Only those that stayed in their
 * stratum are paired: another stratum's weight is another, and counting such an operation as two makes the error of a
 * change larger, never smaller. A pair counts in the county where it was both times. Answers set aside are left out.
 * Units are those of the measure's y and x, and products of them.
 */
export async function readBothSeasons(trx: Transaction<DB>, pair: SeasonPair): Promise<SeasonsTogether> {
	const { before, now, measureKey, cropKey } = pair;
	const ofCrop = (survey: string) => sql`select distinct o.operation_id, o.stratum_key
		from collect.frame_crop c join collect.frame_operation o using (survey_id, operation_id)
		where c.survey_id = ${survey} and o.disposition <> 'not_eligible' and ${cropKey} in ('all', c.crop_key)`;
	const frames = await sql<{ stratumKey: string; n: number }>`
		select stratum_key as "stratumKey", count(*)::int as n
		from (${ofCrop(before)}) b join (${ofCrop(now)}) n using (operation_id, stratum_key)
		group by stratum_key order by stratum_key`.execute(trx);
	const told = (survey: string) => sql`select operation_id, stratum_key, county_fips, y, x from collect.fact
		where survey_id = ${survey} and measure_key = ${measureKey} and crop_key = ${cropKey}
			and not set_aside and y is not null and x is not null`;
	const { rows } = await sql<PairedMoments & { stratumKey: string; countyFips: string }>`
		select stratum_key as "stratumKey", case when b.county_fips = n.county_fips then b.county_fips else '' end as "countyFips",
			count(*)::int as n, sum(b.y) as "sumYBefore", sum(b.x) as "sumXBefore", sum(n.y) as "sumYNow", sum(n.x) as "sumXNow",
			regr_sxy(b.y, n.y) as "mYY", regr_sxy(b.y, n.x) as "mYX", regr_sxy(b.x, n.y) as "mXY", regr_sxy(b.x, n.x) as "mXX"
		from (${told(before)}) b join (${told(now)}) n using (operation_id, stratum_key)
		group by 1, 2 order by 1, 2`.execute(trx);
	const respondents = new Map<string, number>();
	for (const { stratumKey, n } of rows) respondents.set(stratumKey, (respondents.get(stratumKey) ?? 0) + n);
	return {
		frame: new Map(frames.rows.map(({ stratumKey, n }) => [stratumKey, n])),
		respondents,
		pairs: rows.filter(({ countyFips }) => countyFips !== ""),
	};
}

/** The paired moments of an area's counties, by stratum. */
export function pairsOfArea(
	pairs: SeasonsTogether["pairs"],
	isInside: (countyFips: string) => boolean,
): (PairedMoments & { stratumKey: string })[] {
	const byStratum = new Map<string, PairedMoments>();
	for (const { stratumKey, countyFips, ...moments } of pairs) {
		if (isInside(countyFips))
			byStratum.set(stratumKey, addPairedMoments(byStratum.get(stratumKey) ?? emptyPairedMoments, moments));
	}
	return [...byStratum].map(([stratumKey, moments]) => ({ stratumKey, ...moments }));
}
