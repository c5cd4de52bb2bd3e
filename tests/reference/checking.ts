import { readFile } from "node:fs/promises";
import { basename, join } from "node:path";
import { parse } from "csv-parse/sync";
import type { Checker, CheckResult } from "#tests/reference/verify/checker.ts";

/** One expected value beside ours. `scale` is what an expected 0 is judged against, such as the estimate of its error. */
export type Comparison = { at: string; expected: unknown; actual: unknown; tolerance?: number; scale?: number };

/** What became of one file: every comparison made, how many of its values nothing of ours computes, and a remark. */
export type Checked = { comparisons: Comparison[]; notCovered: number; note?: string };

export type Outcome = Comparison & { error: number; passed: boolean };

const defaultTolerance = 1e-9;

/**
 * Judges one comparison by relative error. Text, booleans and null must be equal; a number where null was expected,
 * or NaN, is infinitely wrong.
 */
export function judge(comparison: Comparison): Outcome {
	const { expected, actual, tolerance = defaultTolerance, scale = 0 } = comparison;
	const error = errorOf(expected, actual, scale);
	return { ...comparison, error, passed: error <= tolerance };
}

function errorOf(expected: unknown, actual: unknown, scale: number): number {
	if (typeof expected !== "number" || typeof actual !== "number") return Object.is(expected, actual) ? 0 : Infinity;
	if (!Number.isFinite(expected) || !Number.isFinite(actual)) return Infinity;
	if (expected === actual) return 0;
	// Only an expected value that is itself rounding beside its scale, such as a standard error of 4e-17, is judged by it.
	const size = Math.abs(expected) > 1e-9 * Math.abs(scale) ? Math.abs(expected) : Math.abs(scale);
	return Math.abs(actual - expected) / size;
}

/** A checker from a function that makes comparisons. */
export function comparing(file: RegExp, compare: (folder: string, file: string) => Promise<Checked>): Checker {
	return { file, check: async (path, folder) => resultOf(await compare(folder, basename(path))) };
}

export function resultOf({ comparisons, notCovered, note }: Checked): CheckResult | "not_covered" {
	if (comparisons.length === 0) return "not_covered";
	const outcomes = comparisons.map(judge);
	const failures = outcomes.filter(({ passed }) => !passed).map(describe);
	const largestRelativeError = outcomes.reduce((largest, { error }) => Math.max(largest, error), 0);
	return {
		values: outcomes.length,
		largestRelativeError,
		passed: failures.length === 0,
		notCovered,
		failures,
		...(note && { note }),
	};
}

function describe({ at, expected, actual, error }: Outcome): string {
	return `${at}: expected ${String(expected)}, got ${String(actual)} (${error.toExponential(1)})`;
}

export type Row = Record<string, string>;

/** Reads a CSV file with a header line. Cells stay text: codes such as 01 are not numbers. */
export async function readCsv(folder: string, file: string): Promise<Row[]> {
	return parse(await readFile(join(folder, file)), { columns: true, skip_empty_lines: true, bom: true }) as Row[];
}

export async function readJson(folder: string, file: string): Promise<Json> {
	return JSON.parse(await readFile(join(folder, file), "utf8")) as Json;
}

export type Json = string | number | boolean | null | Json[] | { [key: string]: Json };

export function isObject(json: Json | undefined): json is { [key: string]: Json } {
	return typeof json === "object" && json !== null && !Array.isArray(json);
}

/** A column's number; an empty cell, NA and a missing column are null. @throws {Error} for other text. */
export function numberIn(row: Row, column: string): number | null {
	const text = row[column]?.trim();
	if (text === undefined || text === "" || text === "NA") return null;
	const value = Number(text);
	if (Number.isNaN(value)) throw new Error(`${column} holds "${text}", which is not a number`);
	return value;
}

/** As `numberIn`, where the value must be there. */
export function requiredNumber(row: Row, column: string): number {
	const value = numberIn(row, column);
	if (value === null) throw new Error(`${column} is missing`);
	return value;
}

/** Counts the numbers of a JSON file that are to be met: all but those under the keys given, which are told beforehand. */
export function countNumbers(json: Json | undefined, inputs: ReadonlySet<string> = new Set()): number {
	if (typeof json === "number") return 1;
	if (Array.isArray(json)) return json.reduce<number>((sum, part) => sum + countNumbers(part, inputs), 0);
	if (!isObject(json)) return 0;
	const parts = Object.entries(json).filter(([key]) => !inputs.has(key));
	return parts.reduce((sum, [, part]) => sum + countNumbers(part, inputs), 0);
}
