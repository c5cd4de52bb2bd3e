import { designDegreesOfFreedom, domainDegreesOfFreedom } from "#app/estimate/domain.ts";
import { ratioEstimate, ratioTotalEstimate, separateRatioTotalEstimate } from "#app/estimate/estimators.ts";
import type { QuantileRule } from "#app/estimate/quantile.ts";
import {
	countNumbers,
	isObject,
	readCsv,
	readJson,
	type Checked,
	type Comparison,
	type Json,
} from "#tests/reference/checking.ts";
import {
	column,
	designOf,
	everyone,
	inputOf,
	seenFrom,
	withoutCorrection,
	type Design,
} from "#tests/reference/estimation/design.ts";
import {
	compareFigure,
	compareProportion,
	compareQuantiles,
	namedFigure,
	splitPair,
} from "#tests/reference/estimation/figures.ts";

type Node = { [key: string]: Json };

/**
 * Checks a file of expected figures that begins with its design and names each figure by its variables: `mean_a`,
 * `ratio_a_b`, `by_a` … . Where the figures stand in a block of their own, as in simple random sampling beside adjusted
 * weights, the block `srs` is the one that the design fits; blocks of adjusted weights are not covered.
 */
export async function checkNamedFigures(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	if (!isObject(json) || typeof json.design !== "string") throw new Error(`${file} does not begin with its design`);
	const input = inputOf(json.design) ?? file.replace(/_expected\.json$/, ".csv");
	const design = designOf(await readCsv(folder, input), json.design);
	const comparisons = isObject(json.srs) ? compareBlock("srs", json.srs, design) : compareBlock("", json, design);
	const inputs = countNumbers(isObject(json.separate_ratio_total) ? json.separate_ratio_total.stratum_x_totals : []);
	const compared = comparisons.filter(({ expected }) => typeof expected === "number").length;
	return { comparisons, notCovered: Math.max(0, countNumbers(json) - inputs - compared) };
}

function compareBlock(path: string, block: Node, design: Design): Comparison[] {
	const df = designDegreesOfFreedom(seenFrom(design, everyone, () => 0));
	const found: Comparison[] = [];
	for (const [key, node] of Object.entries(block)) {
		const at = path ? `${path}.${key}` : key;
		if (key === "n") found.push({ at, expected: node, actual: design.strata.reduce((n, s) => n + s.rows.length, 0) });
		else if (key === "degf") found.push({ at, expected: node, actual: df });
		else if (isObject(node)) found.push(...compareNode(at, key, node, design, df, block));
	}
	return found;
}

function compareNode(at: string, key: string, node: Node, design: Design, df: number, block: Node): Comparison[] {
	const figure = namedFigure(design, everyone, key);
	if (figure !== undefined) return compareFigure(at, node, figure, df);
	const [, kind = "", variable = ""] = /^(by|prop|ciprop|quantile)_(.+)$/.exec(key) ?? [];
	if (kind === "by") return compareDomains(at, node, design, variable, df);
	if (kind === "prop") return compareShares(at, node, design, variable);
	if (kind === "ciprop") return compareLevel(at, node, design, variable, df);
	if (kind === "quantile") return compareQuantileRules(at, node, design, variable, df);
	if (key === "no_fpc") return compareWithoutCorrection(at, node, withoutCorrection(design), df, block);
	return compareRatioTotal(at, node, design, df);
}

function compareDomains(at: string, node: Node, design: Design, variable: string, df: number): Comparison[] {
	return Object.entries(isObject(node.levels) ? node.levels : {}).flatMap(([level, figures]) => {
		if (!isObject(figures)) return [];
		const inside = (row: Record<string, string>) => row[variable] === level;
		const seen = seenFrom(design, inside, () => 0);
		const n = seen.reduce((sum, stratum) => sum + stratum.domain.n, 0);
		const path = `${at}.${level}`;
		const found: Comparison[] = [
			{ at: `${path}.n`, expected: figures.n, actual: n },
			{ at: `${path}.degf_of_subset`, expected: figures.degf_of_subset, actual: domainDegreesOfFreedom(seen) },
			{ at: `${path}.degf_full`, expected: figures.degf_full, actual: df },
		];
		for (const [key, expected] of Object.entries(figures)) {
			const figure = namedFigure(design, inside, key);
			if (figure !== undefined && isObject(expected))
				found.push(...compareFigure(`${path}.${key}`, expected, figure, df));
		}
		return found;
	});
}

function compareShares(at: string, node: Node, design: Design, variable: string): Comparison[] {
	const levels = Array.isArray(node.levels) ? node.levels : [];
	return levels.flatMap((name, i) => {
		const level = String(name).slice(variable.length);
		const figure = ratioEstimate(seenFrom(design, everyone, (row) => (row[variable] === level ? 1 : 0)));
		const expected = (list: Json | undefined) => (Array.isArray(list) ? list[i] : undefined);
		return [
			{ at: `${at}.${level}.estimate`, expected: expected(node.estimate), actual: figure?.value ?? null },
			{
				at: `${at}.${level}.se`,
				expected: expected(node.se),
				actual: figure?.standardError ?? null,
				scale: figure?.value,
			},
		];
	});
}

function compareLevel(at: string, node: Node, design: Design, pair: string, df: number): Comparison[] {
	const variable = [...design.columns]
		.filter((name) => pair.startsWith(`${name}_`))
		.toSorted((a, b) => b.length - a.length)[0];
	if (!variable) return [];
	const level = pair.slice(variable.length + 1);
	const strata = seenFrom(design, everyone, (row) => (row[variable] === level ? 1 : 0));
	return [{ at: `${at}.df`, expected: node.df, actual: df }, ...compareProportion(at, node, strata, df)];
}

function compareQuantileRules(at: string, node: Node, design: Design, variable: string, df: number): Comparison[] {
	const rules: Record<string, QuantileRule> = { math_mean: "lower", school_mean: "midpoint" };
	return Object.entries(rules).flatMap(([name, rule]) => {
		const block = node[name];
		if (!isObject(block)) return [];
		return compareQuantiles(`${at}.${name}`, block, design, { domain: everyone, y: column(variable), rule, df });
	});
}

function compareWithoutCorrection(at: string, node: Node, design: Design, df: number, block: Node): Comparison[] {
	// Its ratio is named without variables: it is the ratio of the block that it belongs to.
	const ratioKey = Object.keys(block).find(
		(key) => key.startsWith("ratio_") && splitPair(key.slice(6), design.columns),
	);
	return Object.entries(node).flatMap(([key, expected]) => {
		const figure = namedFigure(design, everyone, key === "ratio" && ratioKey ? ratioKey : key);
		return figure !== undefined && isObject(expected) ? compareFigure(`${at}.${key}`, expected, figure, df) : [];
	});
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
