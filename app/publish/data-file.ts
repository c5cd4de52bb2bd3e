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

export const observationStatuses = ["A", "Q", "M", "N", "O"] as const;
export type ObservationStatus = (typeof observationStatuses)[number];

/**
 * Observation status, from the SDMX cross-domain code list CL_OBS_STATUS (2.x): A normal value, Q missing and suppressed,
 * M missing as it cannot exist, N not significant, O missing. One code for every withheld cell, whatever its reason.
 */
export function observationStatus(row: Pick<DataRow, "cellStatus" | "steadiness" | "value">): ObservationStatus {
	if (row.cellStatus === "withheld") return "Q";
	if (row.cellStatus === "no_growers") return "M";
	if (row.steadiness === null) return "O";
	return row.value === null || row.steadiness === "rough" ? "N" : "A";
}

/** What kind of value a column holds; every format's own types are made from it. */
export type ColumnType = "text" | "integer" | "number" | "date";

const columnTypes = {
	release: "integer",
	season: "integer",
	measure: "text",
	crop: "text",
	area_code: "text",
	area_kind: "text",
	area_name: "text",
	state_code: "text",
	value: "number",
	standard_error: "number",
	cv: "number",
	lower: "number",
	upper: "number",
	first_quartile: "number",
	third_quartile: "number",
	value_date: "date",
	lower_date: "date",
	upper_date: "date",
	first_quartile_date: "date",
	third_quartile_date: "date",
	respondents_band: "text",
	steadiness: "text",
	status: "text",
} as const satisfies Record<string, ColumnType>;
export type DataColumn = keyof typeof columnTypes;
export const dataColumns = Object.keys(columnTypes) as DataColumn[];
export const columnType = (column: DataColumn): ColumnType => columnTypes[column];

/** Filled in every row; what else is empty is empty for the reason that `status` gives. */
export const filledColumns: readonly DataColumn[] = [
	"release",
	"season",
	"measure",
	"crop",
	"area_code",
	"area_kind",
	"area_name",
	"status",
];

type ValueOf = { text: string; integer: number; number: number; date: string };
type Filled = "release" | "season" | "measure" | "crop" | "area_code" | "area_kind" | "area_name";
/** One row of a file, the same in every format. */
export type DataRecord = {
	[C in Exclude<DataColumn, "status">]: ValueOf[(typeof columnTypes)[C]] | (C extends Filled ? never : null);
} & { status: ObservationStatus };

/** The one place that decides what a row tells: a number stands only where the cell is shown and not too rough. */
export function toRecord(release: { number: number; season: number }, row: DataRow): DataRecord {
	const shown = row.cellStatus === "shown" && row.steadiness !== "rough";
	const number = (value: number | null) => (shown ? value : null);
	const date = (day: number | null) =>
		shown && row.unit === "day" && day !== null ? dateOfDay(release.season, day) : null;
	return {
		release: release.number,
		season: release.season,
		measure: row.measureKey,
		crop: row.cropKey,
		area_code: row.areaKey,
		area_kind: row.areaKind,
		area_name: row.areaName,
		state_code: row.stateFips,
		value: number(row.value),
		standard_error: number(row.standardError),
		cv: number(row.cv),
		lower: number(row.lower),
		upper: number(row.upper),
		first_quartile: number(row.firstQuartile),
		third_quartile: number(row.thirdQuartile),
		value_date: date(row.value),
		lower_date: date(row.lower),
		upper_date: date(row.upper),
		first_quartile_date: date(row.firstQuartile),
		third_quartile_date: date(row.thirdQuartile),
		respondents_band: row.cellStatus === "shown" ? row.respondentsBand : null,
		steadiness: row.cellStatus === "shown" ? row.steadiness : null,
		status: observationStatus(row),
	};
}

/** The cells of a release as CSV (RFC 4180). An absent number is an empty field, never 0 and never a word. */
export function cellsCsv(release: { number: number; season: number }, rows: readonly DataRow[]): string {
	return recordsCsv(rows.map((row) => toRecord(release, row)));
}

export function recordsCsv(records: readonly DataRecord[]): string {
	return toCsv(
		dataColumns,
		records.map((record) => dataColumns.map((column) => record[column])),
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
