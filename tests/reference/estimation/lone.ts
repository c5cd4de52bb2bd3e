import { meanEstimate } from "#app/estimate/estimators.ts";
import type { LoneRespondent } from "#app/estimate/variance.ts";
import { isObject, readCsv, readJson, type Checked } from "#tests/reference/checking.ts";
import { column, designOf, everyone, inputOf, seenFrom } from "#tests/reference/estimation/design.ts";

/** What R's `survey.lonely.psu` calls the ways of treating a stratum with one respondent. `fail` is our own rule. */
export const loneRules: Record<string, LoneRespondent> = {
	remove: "certain",
	certainty: "certain",
	adjust: "from_zero",
	average: "as_others",
	fail: "refuse",
};

/** Checks a design that has strata with one respondent, under each way of treating them. */
export async function checkLoneRespondents(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	if (!isObject(json) || typeof json.design !== "string") throw new Error(`${file} does not begin with its design`);
	// The input is named by its data set, whose file can carry a suffix.
	const named = inputOf(json.design)?.replace(/\.csv$/, "") ?? "";
	const input = /lonely/.test(named) ? `${named}.csv` : `${named}_lonely.csv`;
	const design = designOf(await readCsv(folder, input), json.design);
	const checked: Checked = { comparisons: [], notCovered: 0 };
	for (const [key, node] of Object.entries(json)) {
		const [, variable] = /^mean_(.+)$/.exec(key) ?? [];
		if (!variable || !isObject(node)) continue;
		const strata = seenFrom(design, everyone, column(variable));
		for (const [rule, expected] of Object.entries(node)) {
			const lone = loneRules[rule];
			if (!lone || !isObject(expected)) checked.notCovered += 1;
			else if ("error" in expected) {
				checked.comparisons.push({
					at: `${key}.${rule}`,
					expected: true,
					actual: isRefused(() => meanEstimate(strata, lone)),
				});
			} else {
				const figure = meanEstimate(strata, lone);
				checked.comparisons.push(
					{ at: `${key}.${rule}.estimate`, expected: expected.estimate, actual: figure?.value },
					{ at: `${key}.${rule}.se`, expected: expected.se, actual: figure?.standardError },
				);
			}
		}
	}
	return checked;
}

/** Whether an estimate is refused for its design. */
export function isRefused(estimate: () => unknown): boolean {
	try {
		estimate();
		return false;
	} catch (error) {
		if (error instanceof RangeError) return true;
		throw error;
	}
}
