import { pairedMomentsOf, type PairedAnswers } from "#app/lib/paired-moments.ts";
import { momentsOf } from "#app/lib/moments.ts";
import type { TwoSeasonStratum } from "#app/estimate/change.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";

/** A stratum whose operations are all known: those on both frames first, then leavers, then joiners. */
export type Population = { both: number; leavers: number; joiners: number; answers: PairedAnswers[] };

/** Who answered each season, as places in the population. */
export type Sample = { before: readonly number[]; now: readonly number[] };
export type SampleSizes = { before: number; now: number; both: number };

/** Places in the population that were on the frame of each season. */
export function framesOf({ both, leavers, joiners }: Population): { before: number[]; now: number[] } {
	const places = Array.from({ length: both + leavers + joiners }, (_, i) => i);
	return {
		before: places.slice(0, both + leavers),
		now: places.filter((i) => i < both || i >= both + leavers),
	};
}

function season(frame: number[], answers: { y: number; x: number }[]): DomainStratum {
	return {
		weight: frame.length / answers.length,
		samplingFraction: answers.length / frame.length,
		respondents: answers.length,
		domain: momentsOf(answers),
	};
}

/** The sums of one sample's answers, as the estimators take them. */
export function seenIn(population: Population, { before, now }: Sample): TwoSeasonStratum {
	const frames = framesOf(population);
	const answersOf = (places: readonly number[]) => places.map((place) => population.answers[place]!);
	const inBoth = before.filter((place) => now.includes(place));
	return {
		before: season(
			frames.before,
			answersOf(before).map(({ yBefore, xBefore }) => ({ y: yBefore, x: xBefore })),
		),
		now: season(
			frames.now,
			answersOf(now).map(({ yNow, xNow }) => ({ y: yNow, x: xNow })),
		),
		both: {
			frameSize: population.both,
			respondents: inBoth.length,
			domain: pairedMomentsOf(answersOf(inBoth)),
		},
	};
}

/** Every pair of samples of the sizes given in which so many answered both seasons. */
export function allSamples(population: Population, sizes: SampleSizes): Sample[] {
	const frames = framesOf(population);
	const seconds = subsets(frames.now, sizes.now);
	return subsets(frames.before, sizes.before).flatMap((before) => {
		const first = new Set(before);
		return seconds
			.filter((now) => now.filter((place) => first.has(place)).length === sizes.both)
			.map((now) => ({ before, now }));
	});
}

function subsets(places: readonly number[], size: number): number[][] {
	if (size === 0) return [[]];
	return places.flatMap((place, i) => subsets(places.slice(i + 1), size - 1).map((rest) => [place, ...rest]));
}

/** A generator of numbers from 0 to 1, the same for the same seed (mulberry32, from memory). */
export function seeded(seed: number): () => number {
	let state = seed;
	return () => {
		state = (state + 0x6d2b79f5) | 0;
		let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
		mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
		return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
	};
}

/** So many of the places, drawn at random. */
export function drawn(places: readonly number[], size: number, random: () => number): number[] {
	const left = [...places];
	return Array.from({ length: size }, (_, i) => {
		const at = i + Math.floor(random() * (left.length - i));
		[left[i], left[at]] = [left[at]!, left[i]!];
		return left[i]!;
	});
}

/** Each season a simple random sample, with so many that answered both. */
export function drawnWithOverlap(population: Population, sizes: SampleSizes, random: () => number): Sample {
	const { both, leavers } = population;
	const free = drawnApart(population, sizes, random);
	const [common1, common2] = [free.before, free.now].map((places) => places.filter((place) => place < both).length);
	const mixed = drawn(
		Array.from({ length: both }, (_, i) => i),
		both,
		random,
	);
	const kept = mixed.slice(0, sizes.both);
	const first = mixed.slice(sizes.both, common1);
	const second = mixed.slice(common1, common1! + common2! - sizes.both);
	return {
		before: [...kept, ...first, ...free.before.filter((place) => place >= both && place < both + leavers)],
		now: [...kept, ...second, ...free.now.filter((place) => place >= both)],
	};
}

/** Each season a simple random sample; how many answer both is left to chance. */
export function drawnApart(population: Population, sizes: SampleSizes, random: () => number): Sample {
	const frames = framesOf(population);
	return { before: drawn(frames.before, sizes.before, random), now: drawn(frames.now, sizes.now, random) };
}
