/** A small seeded generator (mulberry32), so that the demo is the same on every machine. Not for secrets. */
export function seededRandom(seed: number) {
	let state = seed >>> 0;
	const next = () => {
		state = (state + 0x6d2b79f5) >>> 0;
		let mixed = Math.imul(state ^ (state >>> 15), state | 1);
		mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
	};
	const normal = () => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
	return {
		next,
		whole: (from: number, to: number) => from + Math.floor(next() * (to - from + 1)),
		pick: <T>(items: readonly T[]): T => items[Math.floor(next() * items.length)]!,
		/** Most are small and a few are large, as farms are. */
		lognormal: (median: number, spread: number) => median * Math.exp(spread * normal()),
	};
}
export type Random = ReturnType<typeof seededRandom>;
