import type { Times } from "./timing.ts";

/** One thing measured. `floor` is what the same machine needs at least, measured in the same run; `ratio` is to it. */
export type Line = {
	name: string;
	value: number;
	unit: string;
	floor?: number | null;
	ratio?: number | null;
	/** What is to be reached, in words. */
	goal?: string;
};

type Timed = Omit<Line, "value" | "unit" | "floor" | "ratio"> & { times: Times; floor?: Times };

/** The two lines of something timed: by the clock, and of the processor where it is told. */
export function linesOf({ times, floor, ...line }: Timed): Line[] {
	const { clock, processor } = times;
	const byClock = { ...line, value: clock, unit: "ms", floor: floor?.clock };
	if (processor === null) return [byClock];
	return [byClock, { ...line, value: processor, unit: "ms of the processor", floor: floor?.processor }];
}

/** What a part is given: where its lines go, and how large and how often it measures. */
export type Bench = { print(...lines: Line[]): void; sizes: number[]; runs: number };

/** A part makes what it needs, measures, prints, and leaves nothing behind. */
export type Part = (bench: Bench) => Promise<void>;
