import type { CheckResult } from "./checker.ts";

/** Counts compared values and keeps the worst relative error, for one file. */
export class Comparison {
	values = 0;
	#worst = 0;
	#passed = true;

	/** @param tolerance relative; values under 1 are compared as if they were 1 */
	constructor(readonly tolerance: number) {}

	number(found: number | undefined, expected: number) {
		this.values += 1;
		if (found === expected) return;
		const error = Math.abs((found ?? Number.NaN) - expected) / Math.max(1, Math.abs(expected));
		// NaN compares false with everything, so it must not be able to pass.
		this.#worst = Number.isNaN(error) ? Infinity : Math.max(this.#worst, error);
		if (!(error <= this.tolerance)) this.#passed = false;
	}

	holds(fact: boolean) {
		this.values += 1;
		if (!fact) this.#passed = false;
	}

	sameSet<T>(found: readonly T[], expected: readonly T[]) {
		const wanted = new Set(expected);
		this.values += expected.length;
		if (found.length !== wanted.size || !found.every((item) => wanted.has(item))) this.#passed = false;
	}

	result(note?: string): CheckResult {
		return { values: this.values, largestRelativeError: this.#worst, passed: this.#passed, note };
	}
}
