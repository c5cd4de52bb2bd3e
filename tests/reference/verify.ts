// npm run verify -- FOLDER: recomputes reference values and says, file by file, how far ours are from them.
import { readdir, stat } from "node:fs/promises";
import { basename, join, resolve } from "node:path";
import { pathToFileURL } from "node:url";
import type { Checker, CheckResult } from "#tests/reference/verify/checker.ts";

export type FileResult = Required<CheckResult> & {
	file: string;
	verdict: "pass" | "fail" | "not covered" | "input" | "absent";
};

/** Each file of tests/reference/verify covers one layout and exports its `checkers`; types and tools there export none. */
export async function loadCheckers(): Promise<Checker[]> {
	const folder = join(import.meta.dirname, "verify");
	const files = (await readdir(folder)).filter((name) => name.endsWith(".ts") && !name.endsWith(".test.ts"));
	const modules = await Promise.all(
		files.toSorted().map((name) => import(pathToFileURL(join(folder, name)).href) as Promise<{ checkers?: Checker[] }>),
	);
	return modules.flatMap((module) => module.checkers ?? []);
}

/** Checks every file of a folder; a file that cannot be recomputed does not stop the others. */
export async function verifyFolder(folder: string, checkers: Checker[]): Promise<FileResult[]> {
	const entries = await readdir(folder, { withFileTypes: true });
	const files = entries.filter((entry) => entry.isFile()).map((entry) => entry.name);
	const results: FileResult[] = [];
	for (const file of files.toSorted()) results.push(await verifyFile(folder, file, checkers));
	return results;
}

async function verifyFile(folder: string, file: string, checkers: Checker[]): Promise<FileResult> {
	const nothing = { file, values: 0, largestRelativeError: 0, passed: false, note: "", notCovered: 0, failures: [] };
	const checker = checkers.find((candidate) => candidate.file.test(file));
	if (!checker) return { ...nothing, verdict: isExpected(file) ? "not covered" : "input" };
	try {
		const result = await checker.check(join(folder, file), folder);
		if (result === "not_covered" || result.values === 0) return { ...nothing, verdict: "not covered" };
		return { ...nothing, ...result, verdict: result.passed ? "pass" : "fail" };
	} catch (error) {
		const absent = absentFile(error);
		if (absent) return { ...nothing, note: `needs ${absent}, which is absent`, verdict: "absent" };
		return { ...nothing, note: error instanceof Error ? error.message : String(error), verdict: "fail" };
	}
}

/** Files with answers to be met, as against inputs and notes; anything not plainly an input counts as the former. */
function isExpected(file: string): boolean {
	return (
		!/\.(md|txt)$/.test(file) && /expected|published|weights|montecarlo|calendar|effects|slip|check|cases/.test(file)
	);
}

/** The name of the companion file that was not there, if that is what went wrong. */
function absentFile(error: unknown): string | undefined {
	const missing = error instanceof Error && "code" in error && error.code === "ENOENT" && "path" in error;
	return missing ? basename(String(error.path)) : undefined;
}

function print(results: FileResult[]): void {
	const width = Math.max(4, ...results.map(({ file }) => file.length));
	console.log(`${"file".padEnd(width)}  ${"checked".padStart(8)}  largest error  result`);
	for (const { file, verdict, values, notCovered, largestRelativeError, failures, note } of results) {
		const error = values > 0 ? largestRelativeError.toExponential(1) : "-";
		const rest = notCovered > 0 ? ` (${notCovered} values not covered)` : "";
		console.log(`${file.padEnd(width)}  ${String(values).padStart(8)}  ${error.padStart(13)}  ${verdict}${rest}`);
		if (note) console.log(`    ${note}`);
		for (const failure of failures.slice(0, 5)) console.log(`    ${failure}`);
		if (failures.length > 5) console.log(`    and ${failures.length - 5} more`);
	}
}

/** @returns the exit status: 0 when something was checked and all of it passed. */
export async function main(folderName: string | undefined): Promise<number> {
	if (!folderName) {
		console.error("Usage: npm run verify -- FOLDER");
		return 1;
	}
	const folder = resolve(folderName);
	if (!(await stat(folder).catch(() => undefined))?.isDirectory()) {
		console.error(`There is no folder ${folder}`);
		return 1;
	}
	const results = await verifyFolder(folder, await loadCheckers());
	print(results);
	const checked = results.reduce((sum, result) => sum + result.values, 0);
	const count = (verdict: FileResult["verdict"]) => results.filter((result) => result.verdict === verdict).length;
	console.log(
		`\n${checked} values checked: ${count("pass")} files pass, ${count("fail")} fail, ${count("absent")} lack a file, ${count("not covered")} not covered`,
	);
	if (checked === 0) console.error("Nothing was checked: no file of this folder is known");
	return checked > 0 && count("fail") === 0 ? 0 : 1;
}

if (process.argv[1] && import.meta.filename === resolve(process.argv[1]))
	process.exitCode = await main(process.argv[2]);
