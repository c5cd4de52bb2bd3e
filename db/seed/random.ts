/**
 * A small seeded generator (mulberry32), so that the demo is the same on every machine. Not for secrets.
 * @param seed a text gives each thing of the demo a generator of its own, so that one more draw for one of them does not
 *   change all that come after.
 */
export function seededRandom(seed: number | string) {
	let state = typeof seed === "string" ? hashOf(seed) : seed >>> 0;
	const next = () => {
		state = (state + 0x6d2b79f5) >>> 0;
		let mixed = Math.imul(state ^ (state >>> 15), state | 1);
		mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
	};
	const normal = () => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
	const whole = (from: number, to: number) => from + Math.floor(next() * (to - from + 1));
	return {
		next,
		normal,
		whole,
		chance: (share: number) => next() < share,
		pick: <T>(items: readonly T[]): T => items[Math.floor(next() * items.length)]!,
		/** Most are small and a few are large, as farms are. */
		lognormal: (median: number, spread: number) => median * Math.exp(spread * normal()),
		/** A version 4 UUID in form; it looks random and comes out the same each time. */
		uuid: () => {
			const hex = Array.from({ length: 32 }, () => whole(0, 15).toString(16));
			hex[12] = "4";
			hex[16] = (8 + whole(0, 3)).toString(16);
			return hex.join("").replace(/^(.{8})(.{4})(.{4})(.{4})/, "$1-$2-$3-$4-");
		},
	};
}
export type Random = ReturnType<typeof seededRandom>;

/** Which of `[item, weight]` a draw falls on. */
export function pickWeighted<T>(random: Random, items: readonly (readonly [T, number])[]): T {
	let left = random.next() * items.reduce((sum, [, weight]) => sum + weight, 0);
	return (items.find(([, weight]) => (left -= weight) < 0) ?? items[0]!)[0];
}

/** FNV-1a, 32 bits. */
function hashOf(text: string): number {
	let hash = 0x811c9dc5;
	for (let i = 0; i < text.length; i++) hash = Math.imul(hash ^ text.charCodeAt(i), 0x01000193);
	return hash >>> 0;
}
