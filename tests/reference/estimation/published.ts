import { meanEstimate, totalEstimate } from "#app/estimate/estimators.ts";
import {
	isObject,
	numberIn,
	readCsv,
	readJson,
	requiredNumber,
	type Checked,
	type Json,
} from "#tests/reference/checking.ts";
import {
	designOf,
	everyone,
	findDesign,
	seenFrom,
	withoutCorrection,
	type Design,
	type Domain,
	type Quantity,
} from "#tests/reference/estimation/design.ts";

/** Checks figures printed in published output: our value against the full one, and rounded against the print. */
export async function checkPublished(folder: string, file: string): Promise<Checked> {
	const json = await readJson(folder, file);
	const checked: Checked = { comparisons: [], notCovered: 0 };
	for (const entry of Array.isArray(json) ? json.filter(isObject) : []) {
		const figure = await recompute(folder, String(entry.data), String(entry.call));
		if (!figure) {
			checked.notCovered += 2;
			continue;
		}
		const at = String(entry.id);
		checked.comparisons.push(
			{ at: `${at}.estimate`, expected: entry.computed_estimate, actual: figure.value },
			{ at: `${at}.se`, expected: entry.computed_se, actual: figure.standardError, scale: figure.value },
			{
				at: `${at}.printed_estimate`,
				expected: entry.printed_estimate,
				actual: asPrinted(entry.printed_estimate, figure.value),
			},
			{ at: `${at}.printed_se`, expected: entry.printed_se, actual: asPrinted(entry.printed_se, figure.standardError) },
		);
	}
	return checked;
}

/** The value with as many decimals as the print. One that lies halfway, to rounding, may have been printed either way. */
function asPrinted(printed: Json | undefined, value: number): string {
	const text = String(printed);
	const decimals = (text.split(".")[1] ?? "").length;
	const halfway = Math.abs(Math.abs(value - Number(text)) - 0.5 * 10 ** -decimals) < 1e-12 * Math.abs(value);
	return halfway ? text : value.toFixed(decimals);
}

async function recompute(folder: string, data: string, call: string) {
	const [, input, remark = ""] = /^(\S+\.csv)\s*(.*)$/.exec(data) ?? [];
	const [, kind, expression] = /^svy(mean|total)\(~(.+?),(?:subset\(d,.+\)|d)\)$/.exec(call.replaceAll(" ", "")) ?? [];
	const quantity = expression && quantityOf(expression);
	if (!input || !kind || !quantity) return undefined;
	const full = (await findDesign(folder, input)) ?? (await simpleDesign(folder, input));
	if (!full) return undefined;
	const design: Design = remark.includes("no fpc") ? withoutCorrection(full) : full;
	const domain = domainOf(remark);
	const strata = seenFrom(design, domain, quantity);
	return kind === "mean" ? meanEstimate(strata) : totalEstimate(strata);
}

/** A simple random sample, when no file names the design and every row stands for the same frame. */
async function simpleDesign(folder: string, input: string): Promise<Design | undefined> {
	const rows = await readCsv(folder, input);
	const frames = new Set(rows.map((row) => row.fpc));
	return frames.size === 1 ? designOf(rows, "svydesign(id=~1,weights=~pw,fpc=~fpc)") : undefined;
}

/** `a`, `I(a=='level')` or `I(a-b)`. */
function quantityOf(expression: string): Quantity | undefined {
	const [, variable, level] = /^I\(([\w.]+)==['"](.+)['"]\)$/.exec(expression) ?? [];
	if (variable) return (row) => (row[variable] === level ? 1 : 0);
	const [, a, b] = /^I\(([\w.]+)-([\w.]+)\)$/.exec(expression) ?? [];
	if (a && b) return (row) => requiredNumber(row, a) - requiredNumber(row, b);
	return /^[\w.]+$/.test(expression) ? (row) => requiredNumber(row, expression) : undefined;
}

/** `domain a>20` and the like; a missing value is outside every domain. */
function domainOf(remark: string): Domain {
	const [, variable = "", sign, bound] = /domain\s+([\w.]+)\s*(>=|<=|==|>|<)\s*([\d.]+)/.exec(remark) ?? [];
	if (!sign) return everyone;
	const limit = Number(bound);
	return (row) => {
		const value = numberIn(row, variable);
		if (value === null) return false;
		if (sign === ">") return value > limit;
		if (sign === "<") return value < limit;
		if (sign === ">=") return value >= limit;
		return sign === "<=" ? value <= limit : value === limit;
	};
}
