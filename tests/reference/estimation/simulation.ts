import { pairedMomentsOf } from "#app/lib/paired-moments.ts";
import { preciseZero } from "#app/lib/precise.ts";
import { changeEstimate, residualProducts, type Change } from "#app/estimate/change.ts";
import { normal975 } from "#app/estimate/distributions.ts";
import { isObject, readJson, type Checked, type Comparison, type Json } from "#tests/reference/checking.ts";
import { compareEnumeration, stratumOf, type Stratum } from "#tests/reference/estimation/enumeration.ts";
import {
	drawnApart,
	drawnWithOverlap,
	framesOf,
	seeded,
	seenIn,
	type Population,
} from "#tests/reference/estimation/samples.ts";

const draws = 4000;
const seed = 4_211;

/**
 * Proof of the covariance between seasons. Small populations: over all samples, weighted so that each season's is a simple
 * random sample, our estimates' mean is the covariance that the totals have. Larger ones: the formula at the population,
 * and our own simulation beside the file's, within five of the simulation's errors.
 */
export async function checkSimulation(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	if (!isObject(json) || !isObject(json.results)) throw new Error(`${file} holds no results`);
	const listed = (name: string) => (Array.isArray(json[name]) ? json[name] : []).filter(isObject);
	const strata = listed("population").map((node) => stratumOf(node, "C"));
	const comparisons = listed("exact_enumeration").flatMap((node, i) =>
		compareEnumeration(`enumeration ${i + 1}`, node, stratumOf(node, "common")),
	);
	for (const [name, block] of Object.entries(json.results)) {
		if (isObject(block)) comparisons.push(...compareSimulation(name, block, strata, name === "fixed_nc"));
	}
	return { comparisons, notCovered: 0, note: `simulated values agree within 5 of the errors of ${draws} draws` };
}

type Block = { [key: string]: Json };

function compareSimulation(name: string, block: Block, strata: Stratum[], fixed: boolean): Comparison[] {
	const value = (key: string) => Number(block[key]);
	const formula = strata.reduce((sum, stratum) => sum + covarianceOf(stratum, fixed), 0);
	const ours = simulate(strata, fixed);
	const [empirical, estimated] = [value("cov_totals_empirical"), value("mean_of_estimated_cov_totals")];
	const zs = {
		z_empirical_minus_formula: (empirical - formula) / value("mc_se_of_empirical"),
		z_mean_estimate_minus_formula: (estimated - formula) / value("mc_se_of_mean_estimate"),
		ratio_estimated_to_empirical: value("mean_of_estimated_var_ratio_change") / value("var_ratio_change_empirical"),
	};
	const near = Object.entries(ours).map(([key, { value: actual, error }]) => ({
		at: `${name}.${key}`,
		expected: value(key),
		actual: Math.abs(actual - value(key)) <= 5 * error ? value(key) : actual,
	}));
	return [
		{
			at: `${name}.cov_totals_formula_at_population`,
			expected: value("cov_totals_formula_at_population"),
			actual: formula,
			scale: 1,
		},
		...Object.entries(zs).map(([key, actual]) => ({ at: `${name}.${key}`, expected: value(key), actual, scale: 1 })),
		...near,
	];
}

/** Covariance of the two totals over all samples: with the overlap fixed, or as chance makes it, which comes to 0. */
function covarianceOf({ population, sizes }: Stratum, fixed: boolean): number {
	const { both, answers } = population;
	const [before, now] = [framesOf(population).before.length, framesOf(population).now.length];
	const overlap = fixed ? sizes.both : (sizes.before * sizes.now * both) / (before * now);
	const total = { slope: preciseZero, intercept: preciseZero };
	const domain = pairedMomentsOf(answers.slice(0, both));
	const s12 = residualProducts({ respondents: both, domain }, total, total) / (both - 1);
	return before * now * (overlap / (sizes.before * sizes.now) - both / (before * now)) * s12;
}

type Simulated = { value: number; error: number };

function simulate(strata: Stratum[], fixed: boolean): Record<string, Simulated> {
	const random = seeded(seed);
	const draw = fixed ? drawnWithOverlap : drawnApart;
	const all = Array.from({ length: draws }, () => {
		const seen = strata.map((stratum) => seenIn(stratum.population, draw(stratum.population, stratum.sizes, random)));
		return { total: changeEstimate("total", seen), ratio: changeEstimate("ratio", seen) };
	});
	return summaryOf(all, strata);
}

type Draw = { total: Change; ratio: Change };

function summaryOf(all: Draw[], strata: Stratum[]): Record<string, Simulated> {
	const figures = (pick: (draw: Draw) => number | null | undefined) => all.map((draw) => pick(draw) ?? 0);
	const [totals1, totals2] = [figures(({ total }) => total.before?.value), figures(({ total }) => total.now?.value)];
	const [apart1, apart2] = [deviations(totals1), deviations(totals2)];
	const products = meanOf(apart1.map((each, i) => each * apart2[i]!));
	const [spread1, spread2] = [totals1, totals2].map(spreadOf);
	const changes = figures(({ ratio }) => ratio.difference?.value);
	const spread = spreadOf(changes);
	const errors = figures(({ ratio }) => ratio.difference?.standardError);
	const populations = strata.map(({ population }) => population);
	const target = ratioOf(populations, "Now") - ratioOf(populations, "Before");
	const estimated = meanOf(figures(({ total }) => total.covariance));
	const ignored = figures(({ ratio }) => ratio.before!.standardError! ** 2 + ratio.now!.standardError! ** 2);
	const negative = meanOf(figures(({ ratio }) => Number(ratio.difference!.standardError === null)));
	const atTheirs = Math.sqrt(draws / 2e6);
	return {
		cov_totals_empirical: products,
		mc_se_of_empirical: within(products.error * atTheirs, 0.05),
		mean_of_estimated_cov_totals: estimated,
		mc_se_of_mean_estimate: within(estimated.error * atTheirs, 0.05),
		correlation_of_totals_empirical: over(products, Math.sqrt(spread1!.value * spread2!.value)),
		var_ratio_change_empirical: spread,
		mean_of_estimated_var_ratio_change: meanOf(errors.map((error) => error ** 2)),
		share_negative_estimated_var: { value: negative.value, error: 1 / draws },
		var_if_covariance_ignored_over_empirical: within(meanOf(ignored).value / spread.value, spread.error / spread.value),
		mean_estimated_cov_ratio: meanOf(figures(({ ratio }) => ratio.covariance)),
		coverage_of_95pct_interval: meanOf(
			changes.map((each, i) => Number(Math.abs(each - target) <= normal975 * errors[i]!)),
		),
	};
}

function deviations(values: readonly number[]): number[] {
	const mean = meanOf(values).value;
	return values.map((value) => value - mean);
}

const spreadOf = (values: readonly number[]) => meanOf(deviations(values).map((each) => each ** 2));
const within = (value: number, share: number): Simulated => ({ value, error: value * share });
const over = ({ value, error }: Simulated, by: number): Simulated => ({ value: value / by, error: error / by });

function meanOf(values: readonly number[]): Simulated {
	const value = values.reduce((sum, each) => sum + each, 0) / values.length;
	const variance = values.reduce((sum, each) => sum + (each - value) ** 2, 0) / (values.length - 1);
	return { value, error: Math.sqrt(variance / values.length) };
}

function ratioOf(populations: Population[], season: "Before" | "Now"): number {
	const sums = populations.map((population) => {
		const frame = framesOf(population)[season === "Before" ? "before" : "now"];
		const sum = (name: `y${"Before" | "Now"}` | `x${"Before" | "Now"}`) =>
			frame.reduce((all, place) => all + population.answers[place]![name], 0);
		return { y: sum(`y${season}`), x: sum(`x${season}`) };
	});
	return sums.reduce((all, { y }) => all + y, 0) / sums.reduce((all, { x }) => all + x, 0);
}
