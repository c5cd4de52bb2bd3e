import { Client } from "pg";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { estimates } from "./estimates.ts";
import { type Bench, linesOf } from "./line.ts";
import { makeFacts } from "./made-facts.ts";
import { backendOf, growthExponent, medians, timedInBackend } from "./timing.ts";

const plain = `select county_fips, stratum_key, count(*), sum(x), sum(y) from collect.fact where survey_id = $1
	group by county_fips, stratum_key`;
// Of the one definition of a tally: what is not asked for is not computed.
const moments = `select measure_key, crop_key, county_fips, stratum_key, n, sum_y, sum_x, m_yy, m_xx, m_xy, set_aside, unanswered
	from collect.tallies_of_survey($1)`;
const whole = "select * from collect.tallies_of_survey($1)";

/** Tallies of facts against a plain GROUP BY over the same rows, at every size; then what is estimated from them. */
export async function tally(bench: Bench): Promise<void> {
	await using database = await createTestDatabase();
	const owner = new Client({ connectionString: database.ownerUrl });
	await owner.connect();
	// As the function that tallies a whole survey has them (what writes is never parallel), for all three queries alike.
	await owner.query("set work_mem = '64MB'; set jit = off; set max_parallel_workers_per_gather = 0");
	try {
		const points: Record<"moments" | "whole", { size: number; time: number }[]> = { moments: [], whole: [] };
		for (const size of bench.sizes) {
			const time = await measureSize(bench, owner, size);
			for (const name of ["moments", "whole"] as const)
				points[name].push({ size, time: time[name].processor ?? time[name].clock });
		}
		if (bench.sizes.length > 1) {
			for (const [name, sizes] of Object.entries(points))
				bench.print({
					name: `tally ${name}: growth`,
					value: growthExponent(sizes),
					unit: "exponent",
					goal: "at most 1.1",
				});
		}
	} finally {
		await owner.end();
	}
	const peak = process.resourceUsage().maxRSS / 1024;
	bench.print({
		name: "peak memory of the process",
		value: peak,
		unit: "MB",
		goal: "under 300 at 2,000,000 responses",
	});
}

async function measureSize(bench: Bench, owner: Client, size: number) {
	const surveyId = crypto.randomUUID();
	await makeFacts(owner, surveyId, size);
	const pid = await backendOf(owner);
	// Every row is made and none sent.
	const run = (query: string) => () =>
		timedInBackend(pid, () =>
			owner.query(`explain (analyze, timing off) ${query.replace("$1", owner.escapeLiteral(surveyId))}`),
		);
	const times = await medians(bench.runs, { plain: run(plain), moments: run(moments), whole: run(whole) });
	const of = `${size.toLocaleString("en")} responses`;
	const floor = times.plain;
	bench.print(
		...linesOf({ name: `tally of ${of}`, times: times.moments, floor, goal: "at most 1.5 times the floor" }),
		...linesOf({
			name: `tally of ${of} with owners and two largest`,
			times: times.whole,
			floor,
			goal: "at most 4 times the floor",
		}),
	);
	await owner.query("truncate collect.tally");
	const rebuild = await timedInBackend(pid, () => owner.query("select collect.retally_survey($1)", [surveyId]));
	bench.print(...linesOf({ name: `rebuild of ${of}, tallies written`, times: rebuild, floor }));
	if (size === 1_000_000 || size === bench.sizes.at(-1)) await estimates(bench, owner, surveyId, of);
	return times;
}
