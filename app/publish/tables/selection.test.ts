import fc from "fast-check";
import { expect, test } from "vitest";
import { apiAddresses } from "./api-addresses.ts";
import type { TableCatalogue, TableRelease } from "./catalogue.ts";
import { layOut } from "./layout.ts";
import { canBeTold, readSelection, searchOf, tableDimensions } from "./selection.ts";
import type { DataRecord } from "../data-file.ts";

const release = (number: number, season: number): TableRelease => ({
	number,
	season,
	title: { en: "After harvest", es: "Después de la cosecha" },
	formKey: "after_harvest",
	seriesId: `${number}`,
	rules: {},
	codeVersion: "1",
	replacedBy: null,
	withdrawn: null,
});
const measure = (key: string, season: number) => ({
	...({ key, season, kind: "ratio", unit: "percent", decimals: 0, worse: "more", hue: "loss" } as const),
	label: { en: key, es: key },
	description: { en: key, es: key },
});
const areas = [
	...(["19", "55"] as const).map((key) => ({ key, kind: "state" as const, name: key, stateFips: key })),
	...["19001", "19003", "55001"].map((key) => ({
		key,
		kind: "county" as const,
		name: key,
		stateFips: key.slice(0, 2),
	})),
];
const catalogue: TableCatalogue = {
	releases: [release(2, 2032), release(1, 2031)],
	revisions: false,
	measures: { 1: [measure("loss", 2031)], 2: [measure("loss", 2032), measure("yield", 2032)] },
	crops: { 1: ["all", "apple"], 2: ["all", "apple", "plum"] },
	areas: [
		{ key: "network", kind: "region", name: "Network", stateFips: null, liesIn: { 1: null, 2: null } },
		...areas.map((area) => ({ ...area, liesIn: { 1: "network", 2: "network" } })),
	],
};

const some = (codes: string[]) =>
	fc.subarray([...codes, "made up", "", "1,2", "__proto__"]).map((all) => all.join(","));
const address = fc
	.record({
		release: some(["1", "2"]),
		measure: some(["loss", "yield"]),
		crop: some(["all", "apple", "plum"]),
		kind: some(["state", "county", "region", "district"]),
		state: some(["19", "55"]),
		area: some(["19001", "55001"]),
		layout: fc.constantFrom("wide", "long", "tall", ""),
		columns: some([...tableDimensions]),
		show: some(["error", "interval"]),
		page: fc.constantFrom("1", "-1", "many", "3"),
	})
	.map((fields) => new URLSearchParams(fields));

test("whatever an address says, what is chosen is known, and its own address chooses the same without complaint", () => {
	fc.assert(
		fc.property(address, (search) => {
			const read = readSelection(search, catalogue);
			for (const { code, field } of read.problems) expect([code, field]).not.toContain(undefined);
			if (!canBeTold(read)) {
				expect(read.problems).not.toEqual([]);
				return;
			}
			const own = searchOf(read.selection);
			const again = readSelection(new URLSearchParams(own), catalogue);
			expect(again.problems).toEqual([]);
			expect({ ...again.selection, page: 1 }).toEqual({ ...read.selection, page: 1 });
			expect(searchOf(again.selection)).toBe(own);
		}),
	);
});

test("a name that was made up is told shortened, and only a few of many", () => {
	const many = Array.from({ length: 200 }, (_, index) => `${"x".repeat(500)}${index}`).join(",");
	const { problems } = readSelection(new URLSearchParams({ release: "1", crop: many }), catalogue);
	const told = problems.find(({ field }) => field === "crop")?.detail?.codes;
	expect(String(told).length).toBeLessThan(300);
});

const of = (search: string) => apiAddresses(catalogue, readSelection(new URLSearchParams(search), catalogue).selection);

test("areas of a level and areas by name are asked for at two addresses, only for what each release has", () => {
	const both = "release=1,2&measure=yield,loss&crop=plum,apple&kind=county&state=19&area=55001&layout=long";
	expect(of(both)).toEqual([
		"/api/v1/releases/1/cells?measure=loss&crop=apple&kind=county&state=19&limit=10000",
		"/api/v1/releases/1/cells?measure=loss&crop=apple&area=55001&limit=10000",
		"/api/v1/releases/2/cells?measure=loss,yield&crop=apple,plum&kind=county&state=19&limit=10000",
		"/api/v1/releases/2/cells?measure=loss,yield&crop=apple,plum&area=55001&limit=10000",
	]);
	// The network lies in no state: it is asked for by its name.
	expect(of("release=1&measure=loss&crop=all&kind=region&state=19&layout=long")).toEqual([
		"/api/v1/releases/1/cells?measure=loss&crop=all&area=network&limit=10000",
	]);
	expect(of("release=1&measure=yield&crop=all&kind=region&layout=long")).toEqual([]);
});

const record = fc
	.record({
		release: fc.constantFrom(1, 2),
		measure: fc.constantFrom("loss", "yield"),
		crop: fc.constantFrom("all", "apple", "plum"),
		area_code: fc.constantFrom("network", "19", "19001", "55001"),
	})
	.map((codes) => codes as DataRecord);
const keyOf = (one: DataRecord) => `${one.release}|${one.measure}|${one.crop}|${one.area_code}`;

test("however a table is laid out, each cell stands in it once and nothing else does", () => {
	const cells = fc.uniqueArray(record, { selector: keyOf, minLength: 1 });
	const across = fc.subarray([...tableDimensions], { minLength: 1, maxLength: 3 });
	fc.assert(
		fc.property(cells, across, fc.boolean(), (records, columns, isLong) => {
			const all =
				"release=1,2&measure=loss,yield&crop=all,apple,plum&kind=region,state,county&layout=wide&columns=season";
			const { selection } = readSelection(new URLSearchParams(all), catalogue);
			const laid = layOut(catalogue, { ...selection, columns, layout: isLong ? "long" : "wide" }, records);
			const placed = laid.rows.flatMap((row) => row.cells.filter((cell) => cell !== null));
			expect(placed.map(keyOf).toSorted()).toEqual(records.map(keyOf).toSorted());
			expect(new Set(laid.rows.map(({ key }) => key)).size).toBe(laid.rows.length);
			for (const row of laid.rows) expect(row.cells.length).toBe(laid.columns.length);
		}),
	);
});
