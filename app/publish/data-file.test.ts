import { parse } from "csv-parse/sync";
import { expect, test } from "vitest";
import { cellsCsv, type DataRow, observationStatus, toCsv } from "#app/publish/data-file.ts";

const shown: DataRow = {
	measureKey: "crop_loss",
	cropKey: "apple",
	areaKey: "01001",
	areaKind: "county",
	areaName: 'St. "Old" Elm, North',
	stateFips: "01",
	cellStatus: "shown",
	value: -3,
	standardError: 1.25,
	cv: 0.417,
	lower: -6,
	upper: 0,
	firstQuartile: null,
	thirdQuartile: null,
	unit: "percent",
	respondentsBand: "5-9",
	steadiness: "care",
};
const nothing = {
	value: null,
	standardError: null,
	cv: null,
	lower: null,
	upper: null,
	firstQuartile: null,
	thirdQuartile: null,
	respondentsBand: null,
	steadiness: null,
};
const withheld: DataRow = { ...shown, ...nothing, areaKey: "01003", cellStatus: "withheld" };

test("an outside reader gets back every field, codes with their zeros and zero apart from nothing", () => {
	const [first, second] = parse(cellsCsv({ number: 7, season: 2025 }, [shown, withheld]), { columns: true }) as Record<
		string,
		string
	>[];
	expect(first).toMatchObject({
		release: "7",
		area_code: "01001",
		area_name: shown.areaName,
		value: "-3",
		upper: "0",
		status: "A",
	});
	expect(second).toMatchObject({ area_code: "01003", value: "", upper: "", respondents_band: "", status: "Q" });
});

// SDMX cross-domain code list CL_OBS_STATUS 2.x: A normal, M cannot exist, N not significant, O missing, Q suppressed.
test("shown, withheld, no growers, too rough and not asked have five different codes", () => {
	const codes = [
		observationStatus(shown),
		observationStatus(withheld),
		observationStatus({ ...withheld, cellStatus: "no_growers" }),
		observationStatus({ ...shown, value: null, steadiness: "rough" }),
		observationStatus({ ...shown, ...nothing }),
	];
	expect(codes).toEqual(["A", "Q", "M", "N", "O"]);
});

test("a hidden cell's numbers are not written even when a caller hands them over", () => {
	const leaky = cellsCsv({ number: 7, season: 2025 }, [{ ...shown, cellStatus: "withheld", value: 987654 }]);
	expect(leaky).not.toContain("987654");
});

// RFC 4180, section 2: lines end in CRLF, quotes are doubled. OWASP ASVS 5.0 1.2.10: no field starts a formula.
test("lines end in CRLF, and text that would run as a formula is disarmed while numbers are left alone", () => {
	const csv = toCsv(
		["name", "n"],
		[
			["=HYPERLINK(1)", -5],
			["+1", 2],
			["@x", null],
		],
	);
	expect(csv).toBe("name,n\r\n'=HYPERLINK(1),-5\r\n'+1,2\r\n'@x,\r\n");
});

test("a day of the year stands there as a number and as a date of its season, also in a leap year", () => {
	const day = { ...shown, unit: "day", value: 121, lower: 60, upper: 124, firstQuartile: 118, thirdQuartile: 123 };
	const dates = (season: number) => {
		const csv = cellsCsv({ number: 7, season }, [
			{ ...day, cv: null },
			shown,
			{ ...day, ...nothing, cellStatus: "withheld" },
		]);
		return (parse(csv, { columns: true }) as Record<string, string>[]).map((row) => [
			row.value,
			row.value_date,
			row.lower_date,
			row.upper_date,
			row.first_quartile,
			row.first_quartile_date,
			row.third_quartile_date,
		]);
	};
	const none = Array<string>(4).fill("");
	expect(dates(2024)).toEqual([
		["121", "2024-04-30", "2024-02-29", "2024-05-03", "118", "2024-04-27", "2024-05-02"],
		["-3", "", "", ...none],
		["", "", "", ...none],
	]);
	expect(dates(2025)[0]).toEqual(["121", "2025-05-01", "2025-03-01", "2025-05-04", "118", "2025-04-28", "2025-05-03"]);
});
