import { readFile } from "node:fs/promises";
import { area } from "@turf/turf";
import { parse } from "csv-parse/sync";
import { countyFeatures, listCounties, type County } from "#app/lib/geography/counties.ts";
import { listNeighbors } from "#app/lib/geography/neighbors.ts";
import { countyFinder } from "#app/lib/geography/pin.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import type { Checker, CheckResult } from "./checker.ts";

type Row = Record<string, string>;

/** Areas are stored to 0.001 km2, half of which is 3.2e-6 of the smallest county in the file. */
const areaTolerance = 5e-6;
/** The independent area is of a sphere, along great circles; turf's formula differs from it by up to 2e-5. */
const independentAreaTolerance = 3e-5;

const once = <T>(make: () => T) => {
	let made: { value: T } | undefined;
	return () => (made ??= { value: make() }).value;
};
const counties = once(() => listCounties(usTopology()));
const neighborsOf = once(() => listNeighbors(usTopology()));
const findCounty = once(() => countyFinder(countyFeatures(usTopology()).features));

/** Counts exact comparisons; one that differs is infinitely wrong and named in the note. */
function exact(comparisons: { at: string; expected: string; actual: string }[]): CheckResult {
	const wrong = comparisons.filter(({ expected, actual }) => expected !== actual);
	const [first] = wrong;
	return {
		values: comparisons.length,
		largestRelativeError: wrong.length ? Infinity : 0,
		passed: wrong.length === 0 && comparisons.length > 0,
		...(first && { note: `${first.at}: expected ${first.expected || "nothing"}, got ${first.actual || "nothing"}` }),
	};
}

const isTerritory = (county: County) => Number(county.stateFips) > 56;

function countIn(code: string): number {
	if (code === "all") return counties().length;
	if (code === "50+DC") return counties().filter((county) => !isTerritory(county)).length;
	return counties().filter((county) => county.stateFips === code).length;
}

function checkCounts(rows: Row[]): CheckResult {
	return exact(
		rows.flatMap((row) => {
			const code = row.state_fips ?? "";
			const actual = String(countIn(code));
			return [row["counties_in_us_atlas_3.0.1"], row.expected].flatMap((expected) =>
				expected ? [{ at: code, expected, actual }] : [],
			);
		}),
	);
}

function checkPairs(rows: Row[]): CheckResult {
	return exact(
		rows.map(({ fips_a: a = "", fips_b: b = "", shares_arc_in_us_atlas: expected = "" }) => ({
			at: `${a} and ${b}`,
			expected,
			actual: neighborsOf().get(a)?.includes(b) ? "1" : "0",
		})),
	);
}

function checkNeighbors(rows: Row[]): CheckResult {
	return exact(
		rows.flatMap(({ fips = "", neighbor_fips = "", neighbor_count = "" }) => {
			const ours = neighborsOf().get(fips) ?? [];
			return [
				{ at: fips, expected: neighbor_count, actual: String(ours.length) },
				{ at: fips, expected: neighbor_fips, actual: ours.join(" ") },
			];
		}),
	);
}

function checkPoints(rows: Row[]): CheckResult {
	return exact(
		rows.map(({ place = "", lon, lat, county_fips: expected = "" }) => ({
			at: place,
			expected,
			actual: findCounty()({ longitude: Number(lon), latitude: Number(lat) }) ?? "",
		})),
	);
}

function checkAreas(rows: Row[]): CheckResult {
	const features = countyFeatures(usTopology(), undefined, null).features;
	const outlines = new Map(features.map((feature) => [String(feature.id), feature]));
	const errors = rows.flatMap(({ fips = "", turf_area_km2, independent_spherical_km2 }) => {
		const outline = outlines.get(fips);
		const actual = outline ? area(outline) / 1e6 : NaN;
		const against = (expected: string | undefined, tolerance: number) =>
			expected ? [{ at: fips, error: Math.abs(actual / Number(expected) - 1), tolerance }] : [];
		return [...against(turf_area_km2, areaTolerance), ...against(independent_spherical_km2, independentAreaTolerance)];
	});
	const failed = errors.find(({ error, tolerance }) => !(error <= tolerance));
	return {
		values: errors.length,
		largestRelativeError: errors.reduce(
			(largest, { error }) => Math.max(largest, Number.isNaN(error) ? Infinity : error),
			0,
		),
		passed: !failed && errors.length > 0,
		note: failed
			? `${failed.at}: off by ${failed.error}`
			: `tolerance ${areaTolerance} to turf's area, ${independentAreaTolerance} to the independent one`,
	};
}

const fromRows =
	(check: (rows: Row[]) => CheckResult): Checker["check"] =>
	async (path) =>
		check(parse(await readFile(path), { columns: true, skip_empty_lines: true, bom: true }) as Row[]);

/** County files in the layout of the phenology reference folder. */
export const checkers: Checker[] = [
	{ file: /^county_state_counts\.csv$/, check: fromRows(checkCounts) },
	{ file: /^county_pairs\.csv$/, check: fromRows(checkPairs) },
	{ file: /^county_neighbors\.csv$/, check: fromRows(checkNeighbors) },
	{ file: /^points_in_county\.csv$/, check: fromRows(checkPoints) },
	{ file: /^county_area_check\.csv$/, check: fromRows(checkAreas) },
];
