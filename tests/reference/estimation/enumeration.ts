import { changeEstimate } from "#app/estimate/change.ts";
import type { Comparison, Json } from "#tests/reference/checking.ts";
import {
	allSamples,
	framesOf,
	seenIn,
	type Population,
	type Sample,
	type SampleSizes,
} from "#tests/reference/estimation/samples.ts";

/** One stratum's operations and how many of them answer. */
export type Stratum = { population: Population; sizes: SampleSizes };

export function stratumOf(node: { [key: string]: Json }, both: "C" | "common"): Stratum {
	const list = (name: string) => (Array.isArray(node[name]) ? node[name].map(Number) : undefined);
	const [y1, y2] = [list("y1") ?? [], list("y2") ?? []];
	const [x1, x2] = [list("x1"), list("x2")];
	const answers = y1.map((yBefore, i) => ({ yBefore, xBefore: x1?.[i] ?? 1, yNow: y2[i]!, xNow: x2?.[i] ?? 1 }));
	return {
		population: { both: Number(node[both]), leavers: Number(node.leavers), joiners: Number(node.joiners), answers },
		sizes: { before: Number(node.n1), now: Number(node.n2), both: Number(node.nc) },
	};
}

/**
 * The covariance of two totals over all samples of a small population, those with like numbers of common operations being
 * equally likely and each season a simple random sample; and the mean of our estimates of it.
 */
export function compareEnumeration(
	at: string,
	node: { [key: string]: Json },
	{ population, sizes }: Stratum,
): Comparison[] {
	const samples = allSamples(population, sizes);
	const [common, frames] = [population.both, framesOf(population)];
	const commonIn = (places: readonly number[]) => places.filter((place) => place < common).length;
	const keyOf = ({ before, now }: Sample) => `${commonIn(before)} ${commonIn(now)}`;
	const alike = new Map<string, number>();
	for (const sample of samples) alike.set(keyOf(sample), (alike.get(keyOf(sample)) ?? 0) + 1);
	const mean = { before: 0, now: 0, product: 0, estimate: 0 };
	for (const sample of samples) {
		const { before, now, covariance } = changeEstimate("total", [seenIn(population, sample)]);
		const share =
			chanceOf(commonIn(sample.before), common, frames.before.length, sizes.before) *
			chanceOf(commonIn(sample.now), common, frames.now.length, sizes.now);
		const weight = share / alike.get(keyOf(sample))!;
		mean.before += weight * before!.value;
		mean.now += weight * now!.value;
		mean.product += weight * before!.value * now!.value;
		mean.estimate += weight * covariance!;
	}
	const [top = 0, bottom = 1] = String(node.covariance_of_totals).split("/").map(Number);
	return [
		{ at: `${at} of all samples`, expected: node.covariance, actual: mean.product - mean.before * mean.now },
		{ at: `${at} mean estimate`, expected: node.covariance, actual: mean.estimate },
		{ at: `${at} as a fraction`, expected: top / bottom, actual: mean.estimate },
	];
}

/** How likely a simple random sample is to hold so many of the common operations. */
function chanceOf(common: number, ofCommon: number, frame: number, size: number): number {
	return (choose(ofCommon, common) * choose(frame - ofCommon, size - common)) / choose(frame, size);
}

function choose(n: number, k: number): number {
	return k < 0 || k > n
		? 0
		: Array.from({ length: k }, (_, i) => (n - i) / (i + 1)).reduce((all, each) => all * each, 1);
}
