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

/** What a part is given: where its lines go, and how large and how often it measures. */
export type Bench = { print(line: Line): void; sizes: number[]; runs: number };

/** A part makes what it needs, measures, prints, and leaves nothing behind. */
export type Part = (bench: Bench) => Promise<void>;
