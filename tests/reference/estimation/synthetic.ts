import { groupBy } from "#app/lib/group-by.ts";
import { designDegreesOfFreedom, domainDegreesOfFreedom, domainTotals } from "#app/estimate/domain.ts";
import {
	meanEstimate,
	ratioEstimate,
	ratioTotalEstimate,
	separateRatioTotalEstimate,
	totalEstimate,
	type Figure,
} from "#app/estimate/estimators.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import type { LoneRespondent } from "#app/estimate/variance.ts";
import {
	countNumbers,
	isObject,
	numberIn,
	readCsv,
	readJson,
	requiredNumber,
	type Checked,
	type Comparison,
	type Row,
} from "#tests/reference/checking.ts";
import { column, everyone, seenFrom, type Design, type Domain } from "#tests/reference/estimation/design.ts";
import { calibrated, rowsOf, sampleOf } from "#tests/reference/estimation/estimating.ts";
import { compareFigure, compareProportion, compareQuantiles, type Node } from "#tests/reference/estimation/figures.ts";
import { isRefused, loneRules } from "#tests/reference/estimation/lone.ts";

const y = column("y");
const x = column("x");
const anyLoss = (row: Row) => (requiredNumber(row, "y") > 0 ? 1 : 0);

/**
 * The design that a name such as `A`, `A_nofpc` or `B_adjust` stands for: strata by the column `strA`, respondents
 * only, finite population correction unless `nofpc`, and the way of treating a lone respondent after the underscore.
 */
export function syntheticDesign(frame: Row[], name: string): { design: Design; lone: LoneRespondent } {
	const [letter, variant = ""] = name.split("_");
	const strata = [...groupBy(frame, (row) => row[`str${letter}`] ?? "")].flatMap(([key, members]) => {
		const rows = members.filter((row) => row.resp === "1");
		if (rows.length === 0) return [];
		const samplingFraction = variant === "nofpc" ? 0 : rows.length / members.length;
		return [{ key, rows, weight: members.length / rows.length, samplingFraction }];
	});
	return { design: { strata, columns: new Set(["x", "y"]) }, lone: loneRules[variant] ?? "refuse" };
}

/** Counts, respondents and weights of the strata of each design. */
export async function checkSyntheticStrata(folder: string, file: string): Promise<Checked> {
	const frame = await readCsv(folder, "synthetic_frame.csv");
	const designs = groupBy(await readCsv(folder, file), (row) => row.design ?? "");
	const comparisons: Comparison[] = [];
	for (const [name, rows] of designs) {
		const strata = new Map(syntheticDesign(frame, name).design.strata.map((stratum) => [stratum.key, stratum]));
		for (const row of rows) {
			const stratum = strata.get(row.stratum ?? "");
			const n = stratum?.rows.length;
			const at = `${name} ${row.stratum}`;
			comparisons.push(
				{ at: `${at} r_h`, expected: numberIn(row, "r_h"), actual: n },
				{
					at: `${at} N_h`,
					expected: numberIn(row, "N_h"),
					actual: stratum && Math.round(n! / stratum.samplingFraction),
				},
				{ at: `${at} w`, expected: numberIn(row, "w"), actual: stratum?.weight },
			);
		}
	}
	return { comparisons, notCovered: 0 };
}

/** Each design and domain: counts, totals, ratio, mean and share with any loss. */
export async function checkSyntheticDomains(folder: string, file: string): Promise<Checked> {
	const frame = await readCsv(folder, "synthetic_frame.csv");
	const designs = groupBy(await readCsv(folder, file), (row) => row.design ?? "");
	const comparisons = [...designs].flatMap(([name, rows]) => {
		const { design, lone } = syntheticDesign(frame, name);
		return rows.flatMap((row) => compareDomain(`${name} ${row.domain}`, row, design, lone));
	});
	return { comparisons, notCovered: 0 };
}

function compareDomain(at: string, row: Row, design: Design, lone: LoneRespondent): Comparison[] {
	const kind = row.domain_type ?? "";
	const inside: Domain = kind === "all" ? everyone : (operation) => operation[kind] === row.domain;
	const strata = seenFrom(design, inside, y, x);
	const { respondents, count } = domainTotals(strata);
	const figures: Record<string, Figure | null> = {
		total_y: totalEstimate(strata, lone),
		total_x: totalEstimate(seenFrom(design, inside, x), lone),
		ratio: ratioEstimate(strata, lone),
		mean_y: meanEstimate(strata, lone),
		prop_loss: ratioEstimate(seenFrom(design, inside, anyLoss), lone),
	};
	return [
		{ at: `${at} n_resp`, expected: numberIn(row, "n_resp"), actual: respondents },
		{ at: `${at} degf_domain`, expected: numberIn(row, "degf_domain"), actual: domainDegreesOfFreedom(strata) },
		{ at: `${at} degf_full`, expected: numberIn(row, "degf_full"), actual: designDegreesOfFreedom(strata) },
		{ at: `${at} N_hat`, expected: numberIn(row, "N_hat"), actual: count },
		...Object.entries(figures).flatMap(([name, figure]) => [
			{ at: `${at} ${name}`, expected: numberIn(row, name), actual: figure?.value ?? null },
			{
				at: `${at} se_${name}`,
				expected: numberIn(row, `se_${name}`),
				actual: figure?.standardError ?? null,
				scale: figure?.value,
			},
		]),
	];
}

/** Totals by ratio to a known x, quantiles, and intervals of the share with any loss. */
export async function checkSyntheticFigures(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	if (!isObject(json)) throw new Error(`${file} is not an object`);
	const frame = await readCsv(folder, "synthetic_frame.csv");
	const { design } = syntheticDesign(frame, "A");
	const df = designDegreesOfFreedom(seenFrom(design, everyone, y));
	const comparisons: Comparison[] = [{ at: "degf", expected: json.degf, actual: df }];
	const blocks = (name: string) => Object.entries(isObject(json[name]) ? json[name] : {});

	for (const [key, node] of blocks("ratio_estimated_totals_by_state")) {
		if (!isObject(node)) continue;
		const inside = stateOf(key);
		const total = frameTotal(frame.filter(inside));
		comparisons.push(
			{ at: `${key}.X_frame`, expected: node.X_frame, actual: total },
			...compareFigure(`ratio total ${key}`, node, ratioTotalEstimate(seenFrom(design, inside, y, x), total), df),
		);
	}
	const separate = seenFrom(design, everyone, y, x).map((stratum, i) =>
		Object.assign(stratum, { frameTotalX: frameTotal(frame.filter((row) => row.strA === design.strata[i]!.key)) }),
	);
	if (isObject(json.separate_ratio_total_ALL)) {
		const figure = separateRatioTotalEstimate(separate);
		comparisons.push(...compareFigure("separate ratio total", json.separate_ratio_total_ALL, figure, df));
	}
	if (isObject(json.quantile_y)) {
		comparisons.push(
			...compareQuantiles("quantile_y", json.quantile_y, design, { domain: everyone, y, rule: "lower", df }),
		);
	}
	for (const [key, node] of blocks("prop_any_loss_ci")) {
		const strata = seenFrom(design, stateOf(key), anyLoss);
		const { respondents } = domainTotals(strata);
		const size = { df: domainDegreesOfFreedom(strata), respondents };
		if (isObject(node)) comparisons.push(...compareProportion(`any loss ${key}`, node, ratioEstimate(strata), size));
	}
	comparisons.push(...compareCalibrated(json, frame, design), ...compareLoneStrata(json, frame));
	const compared = comparisons.filter(({ expected }) => typeof expected === "number").length;
	return { comparisons, notCovered: countNumbers(json, new Set(["seed", "p"])) - compared };
}

/** Weights calibrated to each stratum's count and to the frame's normal pounds; `se` is that of the total. */
function compareCalibrated(json: Node, frame: Row[], design: Design): Comparison[] {
	const node = json.greg_strata_plus_x;
	if (!isObject(node)) return [];
	const rows = rowsOf(design);
	const counts = design.strata.map(({ key }) => ({
		name: key,
		values: rows.map((row) => (row.strA === key ? 1 : 0)),
		total: frame.filter((row) => row.strA === key).length,
	}));
	const calibration = calibrateLinear(sampleOf(design), [
		...counts,
		{ name: "x", values: rows.map(x), total: frameTotal(frame) },
	]);
	const { figure } = calibrated(design, calibration);
	const total = figure("total", everyone, y);
	const byState = Object.entries(isObject(node.ratio_by_state) ? node.ratio_by_state : {});
	return [
		{ at: "greg.total_y", expected: node.total_y, actual: total?.value },
		{ at: "greg.se", expected: node.se, actual: total?.standardError },
		...byState.flatMap(([state, expected]) => {
			const ratio = figure("ratio", stateOf(state), y, x);
			return isObject(expected) ? compareFigure(`greg.${state}`, expected, ratio, 0) : [];
		}),
	];
}

/** The strata of design B with one respondent, of several or of one, and that those of several are refused. */
function compareLoneStrata(json: Node, frame: Row[]): Comparison[] {
	const { design, lone } = syntheticDesign(frame, "B_fail");
	const strata = design.strata.filter(({ rows }) => rows.length === 1);
	return [
		{
			at: "lonely_strata_in_B",
			expected: String(json.lonely_strata_in_B),
			actual: String(strata.map(({ key }) => key).toSorted()),
		},
		{
			at: "lonely_fail",
			expected: /only one PSU/.test(String(json.lonely_fail)),
			actual: isRefused(() => totalEstimate(seenFrom(design, everyone, y), lone)),
		},
	];
}

/** Keys are state letters; ALL, with or without a remark, is the whole network. */
function stateOf(key: string): Domain {
	return key.startsWith("ALL") ? everyone : (row) => row.state === key;
}

function frameTotal(rows: Row[]): number {
	return rows.reduce((sum, row) => sum + requiredNumber(row, "x"), 0);
}
