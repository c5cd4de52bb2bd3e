/** What one recomputed reference file came to. */
export interface CheckResult {
	values: number;
	largestRelativeError: number;
	passed: boolean;
	note?: string;
}

/** Knows how to recompute the files whose names match. */
export type Checker = { file: RegExp; check(path: string, folder: string): Promise<CheckResult | "not_covered"> };
