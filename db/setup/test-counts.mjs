// Counts what the test runner reports, so that no kind of failure goes uncounted.
import { relative } from "node:path";

/**
 * @param report the runner's JSON, or undefined when it wrote none.
 * @param code the runner's exit code; one that no counted failure explains is a failure of its own.
 * @returns { passed, failed, skipped }
 */
export function countResults(report, code, root) {
	if (!report) return { passed: 0, failed: 1, skipped: 0 };
	const files = report.testResults ?? [];
	// A file that broke before its tests, or in a hook, has no failed test to count.
	const broken = files.filter(
		({ status, assertionResults = [] }) =>
			status === "failed" && !assertionResults.some((result) => result.status === "failed"),
	);
	for (const { name, message } of broken)
		console.error(`${relative(root, name)}: ${message?.split("\n")[0] ?? "failed"}`);
	const passed = report.numPassedTests ?? 0;
	const failed = (report.numFailedTests ?? 0) + broken.length;
	const skipped = (report.numPendingTests ?? 0) + (report.numTodoTests ?? 0);
	return { passed, failed: code !== 0 && failed === 0 ? 1 : failed, skipped };
}

export const addCounts = (counts) => ({
	passed: counts.reduce((sum, { passed }) => sum + passed, 0),
	failed: counts.reduce((sum, { failed }) => sum + failed, 0),
	skipped: counts.reduce((sum, { skipped }) => sum + skipped, 0),
});

export const summary = ({ passed, failed, skipped }) =>
	`${passed} passed, ${failed} failed${skipped ? `, ${skipped} skipped` : ""}`;
