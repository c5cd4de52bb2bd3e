import { stringify } from "csv-stringify/sync";
import { dateOfDay } from "#app/lib/day-of-year.ts";

/** One row a cell and measure, as researchers get it. Codes are text, so that a county code keeps its zeros. */
export type DataRow = {
	measureKey: string;
	cropKey: string;
	areaKey: string;
	areaKind: string;
	areaName: string;
	stateFips: string | null;
	cellStatus: "shown" | "withheld" | "no_growers";
	value: number | null;
	standardError: number | null;
	cv: number | null;
	lower: number | null;
	upper: number | null;
	firstQuartile: number | null;
	thirdQuartile: number | null;
	/** Of the measure; the numbers of `day` are days of the season's year. */
	unit: string;
	respondentsBand: string | null;
	steadiness: "steady" | "care" | "rough" | null;
};

/**
 * Observation status, from the SDMX cross-domain code list CL_OBS_STATUS (2.x): A normal value, Q missing and suppressed,
 * M missing as it cannot exist, N not significant, O missing. One code for every withheld cell, whatever its reason.
 */
export function observationStatus(
	row: Pick<DataRow, "cellStatus" | "steadiness" | "value">,
): "A" | "Q" | "M" | "N" | "O" {
	if (row.cellStatus === "withheld") return "Q";
	if (row.cellStatus === "no_growers") return "M";
	if (row.steadiness === null) return "O";
	return row.value === null || row.steadiness === "rough" ? "N" : "A";
}

const columns = [
	"release",
	"season",
	"measure",
	"crop",
	"area_code",
	"area_kind",
	"area_name",
	"state_code",
	"value",
	"standard_error",
	"cv",
	"lower",
	"upper",
	"first_quartile",
	"third_quartile",
	"value_date",
	"lower_date",
	"upper_date",
	"first_quartile_date",
	"third_quartile_date",
	"respondents_band",
	"steadiness",
	"status",
] as const;
export type DataColumn = (typeof columns)[number];
export const dataColumns: readonly DataColumn[] = columns;

/** The cells of a release as CSV (RFC 4180). An absent number is an empty field, never 0 and never a word. */
export function cellsCsv(release: { number: number; season: number }, rows: readonly DataRow[]): string {
	return toCsv(
		columns,
		rows.map((row) => {
			const shown = row.cellStatus === "shown" && row.steadiness !== "rough";
			const number = (value: number | null) => (shown ? value : null);
			const date = (day: number | null) =>
				shown && row.unit === "day" && day !== null ? dateOfDay(release.season, day) : null;
			return [
				release.number,
				release.season,
				row.measureKey,
				row.cropKey,
				row.areaKey,
				row.areaKind,
				row.areaName,
				row.stateFips,
				number(row.value),
				number(row.standardError),
				number(row.cv),
				number(row.lower),
				number(row.upper),
				number(row.firstQuartile),
				number(row.thirdQuartile),
				date(row.value),
				date(row.lower),
				date(row.upper),
				date(row.firstQuartile),
				date(row.thirdQuartile),
				row.respondentsBand,
				row.steadiness,
				observationStatus(row),
			];
		}),
	);
}

/**
 * Lines end in CRLF and quotes are doubled, as the standard asks. A text that a spreadsheet would run as a formula is
 * led by an apostrophe (OWASP ASVS 5.0, 1.2.10); numbers, also negative ones, stay numbers.
 */
export function toCsv(header: readonly string[], rows: readonly (readonly (string | number | null)[])[]): string {
	const guarded = rows.map((row) => row.map((field) => (typeof field === "string" ? guard(field) : field)));
	return stringify([header, ...guarded], { record_delimiter: "windows", cast: { number: (value) => String(value) } });
}

function guard(text: string): string {
	return /^[=+\-@\t\r\0]/.test(text) ? `'${text}` : text;
}
