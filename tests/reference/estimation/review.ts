import { isOdd, logSpreadOf, robustScore } from "#app/review/like-operations.ts";
import { ratioBounds, ratioEffects, type RatioEffect, type SeasonPair } from "#app/review/ratio-to-last.ts";
import { unitSlip } from "#app/review/unit-slip.ts";
import { medianOf } from "#app/lib/order-statistics.ts";
import {
	numberIn,
	readCsv,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";
import { groupBy } from "#app/lib/group-by.ts";

type Group = { centre: number | null; effects: RatioEffect[]; notTested: string[] };

/** The effects of one group of pairs; `ALL` is every group together, `given_centre_C` has its centre from outside. */
async function groupOf(folder: string, name: string): Promise<Group> {
	const [, centre] = /^given_centre_(.+)$/.exec(name) ?? [];
	const rows = await readCsv(folder, centre ? "review_hb_given_centre.csv" : "review_hb_pairs.csv");
	const own = centre || name === "ALL" ? rows : rows.filter((row) => row.group === name);
	const pairs = own.map((row): SeasonPair => ({
		key: row.id ?? "",
		last: numberIn(row, "last"),
		now: numberIn(row, "this"),
	}));
	return ratioEffects(pairs, centre ? { centre: Number(centre) } : {});
}

/** Ratio, distance and effect of each pair. */
export async function checkRatioEffects(folder: string, file: string): Promise<Checked> {
	const comparisons: Comparison[] = [];
	for (const [name, rows] of groupBy(await readCsv(folder, file), (row) => row.group ?? "")) {
		const { effects } = await groupOf(folder, name);
		const ours = new Map(effects.map((effect) => [effect.key, effect]));
		for (const row of rows) {
			const effect = ours.get(row.id ?? "");
			comparisons.push(
				...compare(`${name} ${row.id}`, row, { r: effect?.ratio, s: effect?.distance, E: effect?.effect }),
			);
		}
	}
	return { comparisons, notCovered: 0 };
}

/** Quartiles, distances, bounds and flagged pairs of each group and reach. */
export async function checkRatioBounds(folder: string, file: string): Promise<Checked> {
	const comparisons: Comparison[] = [];
	for (const row of await readCsv(folder, file)) {
		const { centre, effects, notTested } = await groupOf(folder, row.group ?? "");
		const bounds = ratioBounds(effects, { reach: requiredNumber(row, "C") });
		const at = `${row.group} C=${row.C}`;
		const values = {
			n: effects.length,
			r_M: centre,
			E_Q1: bounds.lowerQuartile,
			E_M: bounds.median,
			E_Q3: bounds.upperQuartile,
			d_Q1: bounds.lowerDistance,
			d_Q3: bounds.upperDistance,
			lower: bounds.lower,
			upper: bounds.upper,
		};
		comparisons.push(
			...compare(at, row, values),
			{ at: `${at} flagged`, expected: row.flagged, actual: bounds.flagged.join(" ") },
			{ at: `${at} not_tested`, expected: row.not_tested, actual: notTested.join(" ") },
		);
	}
	return { comparisons, notCovered: 0 };
}

/** Robust scores on the log scale, with and without the fallback for a group of like answers. */
export async function checkRobustScores(folder: string, file: string): Promise<Checked> {
	const values = groupBy(await readCsv(folder, "review_z_values.csv"), (row) => row.group ?? "");
	const comparisons = (await readCsv(folder, file)).flatMap((row) => {
		const group = values.get(row.group ?? "") ?? [];
		const all = group.map((each) => numberIn(each, "value"));
		const spread = logSpreadOf(all);
		const value = all[group.findIndex((each) => each.id === row.id)] ?? null;
		const [plain, fallback] = [robustScore(value, spread, "no_score"), robustScore(value, spread)];
		return compare(`${row.group} ${row.id}`, row, {
			n_used: spread?.used ?? all.filter((each) => each !== null && each > 0).length,
			median_log: spread?.median,
			mad_log: spread?.medianDeviation,
			mean_abs_dev_log: spread?.meanDeviation,
			z_mad: plain,
			z_fallback: fallback,
			flag_none_rule: Number(isOdd(plain)),
			flag_fallback_rule: Number(isOdd(fallback)),
		});
	});
	return { comparisons, notCovered: 0 };
}

const ratioOf = (row: Row) => requiredNumber(row, "this") / requiredNumber(row, "last");
const verdicts = { now: "this_in_bushels", last: "last_in_bushels", none: "none" };

/** Slips of bushels for pounds, by the plain ratio and by the ratio over the crop's median. */
export async function checkUnitSlips(folder: string, file: string): Promise<Checked> {
	const rows = await readCsv(folder, file);
	const comparisons = [...groupBy(rows, (row) => row.crop ?? "").values()].flatMap((crop) => {
		const median = medianOf(crop.map(ratioOf));
		return crop.flatMap((row) => {
			const ratio = ratioOf(row);
			const size = requiredNumber(row, "bushel_lb");
			const verdict = (of: number) => verdicts[unitSlip(of, size) ?? "none"];
			return [
				...compare(`${row.id}`, row, { ratio, median_ratio: median, ratio_over_median: ratio / median }),
				{ at: `${row.id} verdict_raw`, expected: row.verdict_raw, actual: verdict(ratio) },
				{ at: `${row.id} verdict_centred`, expected: row.verdict_centred, actual: verdict(ratio / median) },
			];
		});
	});
	return { comparisons, notCovered: 0 };
}

function compare(at: string, row: Row, values: Record<string, number | null | undefined>): Comparison[] {
	return Object.entries(values).map(([name, actual]) => ({
		at: `${at} ${name}`,
		expected: numberIn(row, name),
		actual: actual ?? null,
	}));
}
