/** An axis: its two ends and the values that stand on it, all round numbers. */
export type Scale = { from: number; to: number; ticks: number[] };

const roundSteps = [1, 2, 5, 10];
/** Days are read in days and weeks. */
const daySteps = [1, 2, 7, 14, 28, 56, 112];

/** An axis that holds all values, with about as many ticks as wanted. One value alone gets room on both sides. */
export function scaleOf(values: number[], { zero = false, days = false, wanted = 4 } = {}): Scale {
	const low = Math.min(...values, ...(zero ? [0] : []));
	const high = Math.max(...values, ...(zero ? [0] : []));
	const span = high - low || Math.abs(high) || 1;
	const step = days ? dayStep(span / wanted) : roundStep(span / wanted);
	const from = Math.floor(low / step) * step;
	const last = Math.ceil(high / step) * step;
	const to = last > from ? last : from + step;
	const count = Math.round((to - from) / step);
	// By counting and not by adding, so that a tick is 0.3 and not 0.30000000000000004.
	const ticks = Array.from({ length: count + 1 }, (_, index) => Number((from + index * step).toPrecision(12)));
	return { from, to, ticks };
}

function roundStep(rough: number): number {
	const power = 10 ** Math.floor(Math.log10(rough));
	return (roundSteps.find((step) => step * power >= rough * 0.999) ?? 10) * power;
}

function dayStep(rough: number): number {
	return daySteps.find((step) => step >= rough * 0.999) ?? 112;
}

/** Where a value lies between two ends of a drawing. */
export function placeOn({ from, to }: Scale, start: number, end: number) {
	return (value: number) => Math.round((start + ((value - from) / (to - from)) * (end - start)) * 10) / 10;
}
