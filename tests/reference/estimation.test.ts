import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { joinStrata } from "#app/estimate/strata.ts";
import { readCsv } from "#tests/reference/checking.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { checkers } from "#tests/reference/verify/estimation.ts";

// Sources, tools and versions of each file: tests/reference/data/estimation/SOURCES.md.
const folder = join(import.meta.dirname, "data/estimation");

// The counts guard the guard: a checker that finds less than it used to has stopped checking.
const files: [string, number][] = [
	["api_strat_expected.json", 269],
	["api_strat_nonresponse_expected.json", 255],
	["api_srs_expected.json", 1330],
	["api_srs_weights.csv", 1200],
	["api_lonely_expected.json", 9],
	["published_values.json", 72],
	["synthetic_strata.csv", 309],
	["synthetic_domains_expected.csv", 5586],
	["synthetic_expected.json", 81],
	["change_expected.csv", 1258],
	["change_mean5_expected.json", 60],
	["change_montecarlo.json", 42],
	["days_expected.csv", 756],
	["days_calendar.csv", 53],
	["review_hb_effects.csv", 408],
	["review_hb_expected.csv", 231],
	["review_z_expected.csv", 512],
	["review_unit_slip.csv", 350],
	["allocation_expected.csv", 45],
];

describe("published and recomputed estimates", () => {
	test.each(files)("%s agrees", { timeout: 60_000 }, async (file, values) => {
		const checker = checkers.find((candidate) => candidate.file.test(file))!;
		const result = await checker.check(join(folder, file), folder);
		expect(result).toMatchObject({ passed: true, failures: [], values, notCovered: 0 });
	});
});

test("our joining rule gives the reference set's joined strata, districts standing for states", async () => {
	const frame = await readCsv(folder, "synthetic_frame.csv");
	const strata = [...groupBy(frame, (row) => row.strB!)].map(([stratumKey, rows]) => ({
		stratumKey,
		stateFips: rows[0]!.district!,
		sizeClass: Number(rows[0]!.size),
		frameSize: rows.length,
		respondents: rows.filter((row) => row.resp === "1").length,
	}));
	const ours = joinStrata(strata, new Map(strata.map((stratum) => [stratum.stratumKey, stratum.respondents])));
	const sizes = ours.strata.map(({ frameSize, respondents }) => `${frameSize} ${respondents}`);
	const expected = (await readCsv(folder, "synthetic_strata.csv")).filter((row) => row.design === "C");
	expect(ours.joins.length).toBeGreaterThan(0);
	expect(sizes.toSorted()).toEqual(expected.map((row) => `${row.N_h} ${row.r_h}`).toSorted());
});
