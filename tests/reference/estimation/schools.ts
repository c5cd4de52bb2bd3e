import { designEffect } from "#app/estimate/design-effect.ts";
import { domainDegreesOfFreedom } from "#app/estimate/domain.ts";
import { ratioTotalEstimate, separateRatioTotalEstimate } from "#app/estimate/estimators.ts";
import { exactInterval, logitInterval } from "#app/estimate/interval.ts";
import type { QuantileRule, ShareInterval } from "#app/estimate/quantile.ts";
import {
	countNumbers,
	isObject,
	readCsv,
	readJson,
	type Checked,
	type Comparison,
	type Json,
} from "#tests/reference/checking.ts";
import { calibrationsOf, compareWeights, readTotals } from "#tests/reference/estimation/calibrations.ts";
import {
	column,
	designOf,
	everyone,
	inputOf,
	one,
	seenFrom,
	withoutCorrection,
	type Design,
} from "#tests/reference/estimation/design.ts";
import { calibrated, plain, type Estimating } from "#tests/reference/estimation/estimating.ts";
import {
	compareFigure,
	compareProportion,
	compareQuantiles,
	compareScoreQuantiles,
	namedFigure,
	respondentsIn,
	splitPair,
	type Node,
} from "#tests/reference/estimation/figures.ts";
import { arcsineInterval } from "#tests/reference/estimation/other-methods.ts";

/**
 * Checks a file of expected figures that begins with its design and names each figure by its variables: `mean_a`,
 * `ratio_a_b`, `by_a` … . Where the figures stand in blocks, `srs` has the design's own weights and each other block
 * those of the calibration that it is named for.
 */
export async function checkNamedFigures(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	if (!isObject(json) || typeof json.design !== "string") throw new Error(`${file} does not begin with its design`);
	const input = inputOf(json.design) ?? file.replace(/_expected\.json$/, ".csv");
	const design = designOf(await readCsv(folder, input), json.design);
	const comparisons = isObject(json.srs)
		? compareBlocks(json, design, await readTotals(folder))
		: compareBlock("", json, plain(design));
	const compared = comparisons.filter(({ expected }) => typeof expected === "number").length;
	return { comparisons, notCovered: countNumbers(json, inputs) - compared };
}

/** Keys whose numbers are told, not asked. */
const inputs = new Set(["p", "stratum_x_totals"]);

function compareBlocks(json: Node, design: Design, totals: Node): Comparison[] {
	const calibrations = calibrationsOf(design, totals);
	return Object.entries(json).flatMap(([name, block]) => {
		const calibration = calibrations[name];
		if (!isObject(block)) return [];
		if (name === "srs") return compareBlock(name, block, plain(design));
		if (!calibration) return [];
		const weights = compareWeights(name, block, design, calibration);
		return [...weights, ...compareBlock(name, block, calibrated(design, calibration))];
	});
}

function compareBlock(path: string, block: Node, estimating: Estimating): Comparison[] {
	const found: Comparison[] = [];
	for (const [key, node] of Object.entries(block)) {
		const at = path ? `${path}.${key}` : key;
		if (key === "n") found.push({ at, expected: node, actual: respondentsIn(estimating, everyone) });
		else if (key === "degf") found.push({ at, expected: node, actual: estimating.df });
		else if (key.startsWith("deff_")) found.push(compareDesignEffect(at, key, node, estimating));
		else if (isObject(node)) found.push(...compareNode(at, key, node, estimating, block));
	}
	return found;
}

function compareNode(at: string, key: string, node: Node, estimating: Estimating, block: Node): Comparison[] {
	const { design, df } = estimating;
	const figure = namedFigure(estimating, everyone, key);
	if (figure !== undefined) return compareFigure(at, node, figure, df);
	const [, kind = "", variable = ""] = /^(by|prop|ciprop|quantile)_(.+)$/.exec(key) ?? [];
	if (kind === "by") return compareDomains(at, node, estimating, variable);
	if (kind === "prop") return compareShares(at, node, estimating, variable);
	if (kind === "ciprop") return compareLevel(at, node, estimating, variable);
	if (kind === "quantile") return compareQuantileRules(at, node, estimating, variable);
	if (key === "no_fpc") return compareWithoutCorrection(at, node, plain(withoutCorrection(design)), block);
	if (key === "N_h" || key === "r_h") return compareStrata(at, key, node, design);
	return compareRatioTotal(at, node, design, df);
}

function compareDesignEffect(at: string, key: string, expected: Json, { figure, parts }: Estimating): Comparison {
	const [, replaced, variable = ""] = /^deff_(replace_)?mean_(.+)$/.exec(key) ?? [];
	const mean = figure("mean", everyone, column(variable));
	const sums = parts(everyone, column(variable));
	return { at, expected, actual: designEffect(mean!.standardError ** 2, sums, replaced ? "again" : "once") };
}

function compareDomains(at: string, node: Node, estimating: Estimating, variable: string): Comparison[] {
	return Object.entries(isObject(node.levels) ? node.levels : {}).flatMap(([level, figures]) => {
		if (!isObject(figures)) return [];
		const inside = (row: Record<string, string>) => row[variable] === level;
		const df = domainDegreesOfFreedom(seenFrom(estimating.design, inside, one));
		const path = `${at}.${level}`;
		const found: Comparison[] = [
			{ at: `${path}.n`, expected: figures.n, actual: respondentsIn(estimating, inside) },
			{ at: `${path}.degf_of_subset`, expected: figures.degf_of_subset, actual: df },
			{ at: `${path}.degf_full`, expected: figures.degf_full, actual: estimating.df },
		];
		for (const [key, expected] of Object.entries(figures)) {
			const figure = namedFigure(estimating, inside, key);
			if (figure !== undefined && isObject(expected))
				found.push(...compareFigure(`${path}.${key}`, expected, figure, estimating.df));
		}
		return found;
	});
}

function compareShares(at: string, node: Node, { figure }: Estimating, variable: string): Comparison[] {
	const levels = Array.isArray(node.levels) ? node.levels : [];
	return levels.flatMap((name, i) => {
		const level = String(name).slice(variable.length);
		const share = figure("proportion", everyone, (row) => (row[variable] === level ? 1 : 0));
		const expected = (list: Json | undefined) => (Array.isArray(list) ? list[i] : undefined);
		return [
			{ at: `${at}.${level}.estimate`, expected: expected(node.estimate), actual: share?.value ?? null },
			{
				at: `${at}.${level}.se`,
				expected: expected(node.se),
				actual: share?.standardError ?? null,
				scale: share?.value,
			},
		];
	});
}

function compareLevel(at: string, node: Node, estimating: Estimating, pair: string): Comparison[] {
	const variable = [...estimating.design.columns]
		.filter((name) => pair.startsWith(`${name}_`))
		.toSorted((a, b) => b.length - a.length)[0];
	if (!variable) return [];
	const level = pair.slice(variable.length + 1);
	const share = estimating.figure("proportion", everyone, (row) => (row[variable] === level ? 1 : 0));
	const { df } = estimating;
	const respondents = respondentsIn(estimating, everyone);
	return [
		{ at: `${at}.df`, expected: node.df, actual: df },
		...compareProportion(at, node, share, { df, respondents }),
	];
}

/** `math_beta` and the like: how a tie is settled, and by which interval of the share. `score` is a method of its own. */
function compareQuantileRules(at: string, node: Node, { design, df }: Estimating, variable: string): Comparison[] {
	const rules: Record<string, QuantileRule> = { math: "lower", school: "midpoint" };
	const intervals: Record<string, ShareInterval | undefined> = {
		xlogit: logitInterval,
		beta: exactInterval,
		asin: arcsineInterval,
	};
	return Object.entries(node).flatMap(([name, block]) => {
		const [ruleName = "", method = ""] = name.split("_");
		const rule = rules[ruleName];
		if (!isObject(block) || !rule) return [];
		const question = { domain: everyone, y: column(variable), df };
		if (method === "score") return compareScoreQuantiles(`${at}.${name}`, block, design, question);
		return compareQuantiles(`${at}.${name}`, block, design, { ...question, rule, interval: intervals[method] });
	});
}

function compareWithoutCorrection(at: string, node: Node, estimating: Estimating, block: Node): Comparison[] {
	// Its ratio is named without variables: it is the ratio of the block that it belongs to.
	const ratioKey = Object.keys(block).find(
		(key) => key.startsWith("ratio_") && splitPair(key.slice(6), estimating.design.columns),
	);
	return Object.entries(node).flatMap(([key, expected]) => {
		const figure = namedFigure(estimating, everyone, key === "ratio" && ratioKey ? ratioKey : key);
		if (figure === undefined || !isObject(expected)) return [];
		return compareFigure(`${at}.${key}`, expected, figure, estimating.df);
	});
}

function compareStrata(at: string, key: "N_h" | "r_h", node: Node, { strata }: Design): Comparison[] {
	return strata.map(({ key: stratum, rows, weight }) => ({
		at: `${at}.${stratum}`,
		expected: node[stratum],
		actual: key === "r_h" ? rows.length : rows.length * weight,
	}));
}

function compareRatioTotal(at: string, node: Node, design: Design, df: number): Comparison[] {
	const [, y, x] = /svyratio\(~([\w.]+),~([\w.]+),/.exec(String(node.call ?? "")) ?? [];
	if (!y || !x || !design.columns.has(y) || !design.columns.has(x)) return [];
	const strata = seenFrom(design, everyone, column(y), column(x));
	const totals = node.stratum_x_totals;
	if (isObject(totals)) {
		const separate = strata.map((stratum, i) => ({ ...stratum, frameTotalX: Number(totals[design.strata[i]!.key]) }));
		return compareFigure(at, node, separateRatioTotalEstimate(separate), df);
	}
	const total = /total\s*=\s*([\d.]+)/.exec(String(node.call))?.[1];
	return total ? compareFigure(at, node, ratioTotalEstimate(strata, Number(total)), df) : [];
}
