import { expect, test } from "vitest";
import type { CropCell } from "#app/publish/cell.ts";
import { unshownSeasons } from "./unshown-seasons.ts";

const cell: CropCell = { cropKey: "plum", areaKey: "IA", areaName: "Iowa", kind: "state", stateFips: "19", status: "shown", value: 40, lower: 30, upper: 50, quartiles: null, steadiness: "steady", respondentsBand: "20-49" }; // prettier-ignore
const none = { ...cell, value: null, lower: null, upper: null };

test("every season between the first and the last without a number is told, each with why", () => {
	const rows = [
		{ season: 2025, cell: { ...none, status: "withheld" as const, steadiness: null } },
		{ season: 2026, cell },
		{ season: 2028, cell: { ...none, steadiness: "rough" as const } },
		{ season: 2029, cell: { ...none, steadiness: null } },
		{ season: 2030, cell: { ...none, status: "no_growers" as const, steadiness: null } },
		{ season: 2031, cell },
	];
	expect(unshownSeasons(rows).map(({ season, why }) => `${season} ${why}`)).toEqual([
		"2025 withheld",
		"2027 not_released",
		"2028 rough",
		"2029 no_figure",
		"2030 no_growers",
	]);
	expect(unshownSeasons([{ season: 2031, cell }])).toEqual([]);
});
