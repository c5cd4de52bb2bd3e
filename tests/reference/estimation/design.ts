import { groupBy } from "#app/lib/group-by.ts";
import { momentsOf } from "#app/lib/moments.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";
import type { HistogramStratum } from "#app/estimate/quantile.ts";
import { readCsv, readJson, isObject, requiredNumber, type Row } from "#tests/reference/checking.ts";
import { readdir } from "node:fs/promises";

/** A stratified design with its respondents, one row each. */
export type Design = { strata: DesignStratum[]; columns: Set<string> };
export type DesignStratum = { key: string; rows: Row[]; weight: number; samplingFraction: number };
export type Domain = (row: Row) => boolean;
export type Quantity = (row: Row) => number;

export const everyone: Domain = () => true;
export const column =
	(name: string): Quantity =>
	(row) =>
		requiredNumber(row, name);
export const one: Quantity = () => 1;

/**
 * Builds a design from the call that made it, such as `svydesign(id=~1,strata=~a,weights=~w,fpc=~N,data=file)`.
 * Weights are constant within a stratum; without `fpc` the sampling fraction is 0.
 */
export function designOf(rows: Row[], call: string): Design {
	const argument = (name: string) => new RegExp(`\\b${name}\\s*=\\s*~\\s*([\\w.]+)`).exec(call)?.[1];
	const stratumColumn = argument("strata");
	const weightColumn = argument("weights");
	const frameColumn = argument("fpc");
	if (!weightColumn) throw new Error(`the design names no weights: ${call}`);
	const groups = groupBy(rows, (row) => (stratumColumn ? (row[stratumColumn] ?? "") : "all"));
	const strata = [...groups].map(([key, members]) => ({
		key,
		rows: members,
		weight: requiredNumber(members[0]!, weightColumn),
		samplingFraction: frameColumn ? members.length / requiredNumber(members[0]!, frameColumn) : 0,
	}));
	return { strata, columns: new Set(Object.keys(rows[0] ?? {})) };
}

/** The input file that a design text names, as `input NAME.csv` or `data=NAME`. */
export function inputOf(call: string): string | undefined {
	const named = /input\s+([\w.-]+\.csv)/.exec(call)?.[1];
	const data = /\bdata\s*=\s*([\w.]+)/.exec(call)?.[1];
	return named ?? (data ? `${data}.csv` : undefined);
}

/** The design that some expected file of the folder gives for an input file. */
export async function findDesign(folder: string, input: string): Promise<Design | undefined> {
	for (const file of (await readdir(folder)).filter((name) => name.endsWith("_expected.json"))) {
		const json = await readJson(folder, file);
		const call = isObject(json) && typeof json.design === "string" ? json.design : "";
		if (call.includes("svydesign") && inputOf(call) === input) return designOf(await readCsv(folder, input), call);
	}
	return undefined;
}

export function withoutCorrection(design: Design): Design {
	return { ...design, strata: design.strata.map((stratum) => ({ ...stratum, samplingFraction: 0 })) };
}

/** The design seen from a domain, as the estimators take it. Quantities are asked of respondents inside only. */
export function seenFrom(design: Design, domain: Domain, y: Quantity, x: Quantity = one): DomainStratum[] {
	return design.strata.map(({ rows, weight, samplingFraction }) => ({
		weight,
		samplingFraction,
		respondents: rows.length,
		domain: momentsOf(rows.filter(domain).map((row) => ({ y: y(row), x: x(row) }))),
	}));
}

/** The design seen from a domain as counts by value, as quantiles take it. */
export function histogramOf(design: Design, domain: Domain, y: Quantity): HistogramStratum[] {
	return design.strata.map(({ rows, weight, samplingFraction }) => ({
		weight,
		samplingFraction,
		respondents: rows.length,
		counts: rows.filter(domain).map((row) => ({ value: y(row), n: 1 })),
	}));
}
