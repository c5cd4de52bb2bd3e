/** What one recomputed reference file came to. */
export interface CheckResult {
	values: number;
	largestRelativeError: number;
	passed: boolean;
	note?: string;
	/** Values of the file that nothing of ours computes yet. */
	notCovered?: number;
	/** One line for each value that failed. */
	failures?: string[];
}

/** Knows how to recompute the files whose names match. A missing companion file may throw as the file system does. */
export type Checker = { file: RegExp; check(path: string, folder: string): Promise<CheckResult | "not_covered"> };
