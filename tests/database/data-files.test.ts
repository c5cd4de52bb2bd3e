import { createHash } from "node:crypto";
import { mkdtemp, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { DuckDBInstance } from "@duckdb/node-api";
import { check } from "@placemarkio/check-geojson";
import Ajv from "ajv";
import addFormats from "ajv-formats";
import { parse } from "csv-parse/sync";
import exceljs from "exceljs";
import { unzipSync } from "fflate";
import type { Feature, FeatureCollection, MultiPolygon, Polygon, Position } from "geojson";
import { parquetReadObjects } from "hyparquet";
import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { makeReleaseFiles } from "#app/jobs/make-release-files.server.ts";
import { columnType, dataColumns, type DataRecord } from "#app/publish/data-file.ts";
import { listFiles } from "#app/publish/release-files.server.ts";
import { serveFile } from "#app/publish/serve-file.server.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { dataPackageProfile } from "./data-package-profile.ts";
import { secret } from "./publish-fixture.ts";
import { addOddRelease, addReleaseWithFiles } from "./released-files-fixture.ts";
import { connectOwner, useDatabase } from "./surveys-fixture.ts";

type Row = Record<string, string | number | null>;

let database: TestDatabase;
let owner: Client;
let release: Awaited<ReturnType<typeof addReleaseWithFiles>>;
const files = new Map<string, Buffer>();
/** The rows as csv-parse reads cells.csv, an empty field as null and a number where its column holds numbers. */
let rows: Row[];

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	release = await addReleaseWithFiles(owner);
	const kept = await owner.query<{ name: string; content: Buffer }>(
		"select name, content from release.file where release_id = $1 order by position",
		[release.releaseId],
	);
	for (const { name, content } of kept.rows) files.set(name, content);
	rows = (parse(text("cells.csv"), { columns: true }) as Record<string, string>[]).map(typed);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

function bytes(name: string): Buffer {
	const found = files.get(name);
	if (!found) throw new Error(`${name} is not among ${[...files.keys()].join(", ")}`);
	return found;
}
const text = (name: string) => bytes(name).toString("utf8");
const json = <T>(name: string) => JSON.parse(text(name)) as T;
const zip = () => unzipSync(bytes(`tallygrove-release-${release.number}.zip`));
const isNumber = (column: string) => ["integer", "number"].includes(columnType(column as (typeof dataColumns)[number]));

function typed(row: Record<string, string>): Row {
	return Object.fromEntries(
		Object.entries(row).map(([column, value]) => [
			column,
			value === "" ? null : isNumber(column) ? Number(value) : value,
		]),
	);
}
/** Other formats need no apostrophe before a text that a spreadsheet would run. */
const unguarded = (all: Row[]) =>
	all.map((row) => ({ ...row, area_name: String(row.area_name).replace(/^'=/, "=") }) as Row);

/** A folder with the files, for readers that want one. */
async function folder(): Promise<string> {
	const path = await mkdtemp(join(tmpdir(), "release-files-"));
	await Promise.all([...files].map(([name, content]) => writeFile(join(path, name), content)));
	return path;
}

async function duck(query: string): Promise<Row[]> {
	const connection = await (await DuckDBInstance.create(":memory:")).connect();
	try {
		const result = await connection.runAndReadAll(query);
		return result.getRowObjectsJson() as Row[];
	} finally {
		connection.closeSync();
	}
}
const byKey = (all: Row[]) =>
	all.toSorted((a, b) => (`${a.measure}|${a.crop}|${a.area_code}` < `${b.measure}|${b.crop}|${b.area_code}` ? -1 : 1));

const told = (measure: string, crop: string, area: string) => {
	const row = rows.find((one) => one.measure === measure && one.crop === crop && one.area_code === area)!;
	return [row.value, row.status, row.respondents_band];
};

describe("the files of a release", () => {
	test("state the terms of use wherever a format has a place for it, and no licence that nobody named", async () => {
		const identify = "Nobody uses them to work out a grower, a farm or a withheld figure.";
		for (const name of [
			"csv-metadata.json",
			"datapackage.json",
			"sdmx-structure.json",
			"codebook.json",
			"codebook.csv",
			"counties.geojson",
		]) {
			expect(text(name), name).toContain(identify);
			expect(text(name), name).toContain("cita la publicación por su número");
			expect(text(name), name).not.toMatch(/"(dc:)?licen[sc]e[s"]*: *["{[]/);
		}
		const [kept] = await duck(
			`select decode(value) as terms from parquet_kv_metadata('${await folder()}/cells.parquet') where decode(key) = 'terms_of_use'`,
		);
		expect(kept?.terms).toContain(identify);
	});

	test("are kept with the size and checksum of their bytes, and the archive holds the same bytes", async () => {
		const facts = await listFiles(release.releaseId);
		expect(facts.length).toBe(files.size);
		for (const { name, byteCount, sha256 } of facts) {
			expect(byteCount, name).toBe(bytes(name).length);
			expect(sha256, name).toBe(createHash("sha256").update(bytes(name)).digest("hex"));
		}
		const entries = Object.entries(zip());
		expect(entries.length).toBe(files.size - 1);
		for (const [path, content] of entries) {
			const name = path.split("/")[1]!;
			expect(Buffer.from(content).equals(bytes(name)), name).toBe(true);
		}
		const lines = text("SHA256SUMS").trimEnd().split("\n");
		expect(lines).toEqual(
			facts
				.filter(({ name }) => !name.endsWith(".zip") && name !== "SHA256SUMS")
				.map(({ name, sha256 }) => `${sha256}  ${name}`),
		);
	});

	test("are made once: a second run changes nothing, and the table refuses other bytes", async () => {
		const before = await listFiles(release.releaseId);
		await makeReleaseFiles(release);
		expect(await listFiles(release.releaseId)).toEqual(before);
		await expect(
			owner.query("update release.file set content = 'x', byte_count = 1 where release_id = $1", [release.releaseId]),
		).rejects.toThrow("published_figures_are_frozen");
	});

	test("tell shown, zero, withheld, too rough, no growers and not asked apart", () => {
		expect(told("crop_loss", "apple", "19103")).toEqual([38, "A", "10-19"]);
		expect(told("crop_loss", "plum", "01001")).toEqual([0, "A", "5-9"]);
		expect(told("crop_loss", "apple", "19113")).toEqual([null, "Q", null]);
		expect(told("crop_loss", "apple", "19153")).toEqual([null, "N", "5-9"]);
		expect(told("crop_loss", "apple", "19169")).toEqual([null, "M", null]);
		expect(told("yield_per_tree", "apple", "19103")).toEqual([null, "O", "10-19"]);
	});

	test("hold a name that would run as a formula as text that cannot", async () => {
		expect(text("cells.csv")).toContain(`"'=Autauga, ""old"""`);
		const book = new exceljs.Workbook();
		await book.xlsx.load(bytes("cells.xlsx") as never);
		const types = new Set<exceljs.ValueType>();
		book.eachSheet((sheet) => sheet.eachRow((row) => row.eachCell((cell) => types.add(cell.type))));
		expect([...types]).not.toContain(exceljs.ValueType.Formula);
	});
});

describe("outside readers find the same cells in every format:", () => {
	test("DuckDB in the CSV file, with the types that the metadata tells", async () => {
		const { tables } = json<Csvw>("csv-metadata.json");
		const columns = tables[0]!.tableSchema.columns;
		expect(columns.map(({ name }) => name)).toEqual(text("cells.csv").split("\r\n")[0]!.split(","));
		const names = { string: "varchar", integer: "integer", number: "double" } as Record<string, string>;
		const types = columns.map(({ name, datatype }) => `'${name}': '${names[String(datatype)] ?? "date"}'`).join(", ");
		const read = await duck(
			`select * from read_csv('${await folder()}/cells.csv', header = true, columns = {${types}}, nullstr = '')`,
		);
		expect(read).toEqual(rows);
	});

	test("hyparquet and DuckDB in the Parquet file, dates as dates and nothing as null", async () => {
		const file = bytes("cells.parquet");
		const copy = file.buffer.slice(file.byteOffset, file.byteOffset + file.length) as ArrayBuffer;
		const read = (await parquetReadObjects({ file: copy })) as Record<string, unknown>[];
		const plain = read.map((row) =>
			Object.fromEntries(
				Object.entries(row).map(([name, value]) => [
					name,
					value instanceof Date ? value.toISOString().slice(0, 10) : (value ?? null),
				]),
			),
		);
		expect(plain).toEqual(unguarded(rows));
		const path = `${await folder()}/cells.parquet`;
		expect(await duck(`select * from '${path}'`)).toEqual(unguarded(rows));
		const [described] = await duck(
			`select typeof(area_code) as code, typeof(value) as value, typeof(value_date) as day from '${path}' limit 1`,
		);
		expect(described).toEqual({ code: "VARCHAR", value: "DOUBLE", day: "DATE" });
	});

	test("exceljs in the workbook, codes as texts", async () => {
		const book = new exceljs.Workbook();
		await book.xlsx.load(bytes("cells.xlsx") as never);
		const sheet = book.getWorksheet("cells")!;
		const read: Row[] = [];
		sheet.eachRow((row, index) => {
			if (index === 1) return;
			const cells = dataColumns.map((name, at) => [name, plainCell(row.getCell(at + 1).value)]);
			read.push(Object.fromEntries(cells) as Row);
		});
		expect(read).toEqual(unguarded(rows));
		expect(book.worksheets.map(({ name }) => name)).toEqual(["cells", "codebook", "códigos"]);
		expect(JSON.stringify(book.getWorksheet("codebook")!.getSheetValues())).toContain("Withheld");
	});

	test("the codebook with the questions in both languages, and no text that a spreadsheet would run", () => {
		const asked = JSON.parse(text("codebook.json")).form;
		expect(asked).toMatchObject({ version: 2, screens: [{ questions: [{ key: "harvested" }, { key: "cause" }] }] });
		const questions = (parse(text("codebook.csv"), { columns: true }) as Record<string, string>[]).filter(({ part }) =>
			["question", "option"].includes(part!),
		);
		expect(questions.map(({ language, code, name }) => [language, code, name])).toEqual([
			["en", "harvested", "'=How much?"],
			["en", "cause", "What was lost to?"],
			["en", "cause.freeze", "Freeze or frost"],
			["en", "cause.hail", "Hail"],
			["es", "harvested", "¿Cuánto?"],
			["es", "cause", "¿Por qué se perdió?"],
			["es", "cause.freeze", "Helada"],
			["es", "cause.hail", "Granizo"],
		]);
	});

	test("a reader of SDMX-CSV in its file, with NaN for what has no value and C for all that is withheld", async () => {
		const lines = parse(text("cells.sdmx.csv"), { columns: true }) as Record<string, string>[];
		const read = lines.map((line) => ({
			season: Number(line.TIME_PERIOD),
			measure: line.MEASURE!.replaceAll("-", "."),
			crop: line.CROP!,
			area_code: line.REF_AREA!,
			value: line.OBS_VALUE === "NaN" ? null : Number(line.OBS_VALUE),
			...Object.fromEntries(
				["standard_error", "cv", "lower", "upper", "first_quartile", "third_quartile"].map((name) => {
					const value = line[name.toUpperCase()]!;
					return [name, value === "" ? null : Number(value)];
				}),
			),
			respondents_band: line.RESPONDENTS_BAND || null,
			steadiness: line.STEADINESS || null,
			status: line.OBS_STATUS,
		}));
		const same = Object.keys(read[0]!);
		expect(read).toEqual(rows.map((row) => Object.fromEntries(same.map((name) => [name, row[name]]))));
		expect(new Set(lines.map(({ OBS_STATUS, CONF_STATUS }) => `${OBS_STATUS}${CONF_STATUS}`))).toEqual(
			new Set(["AF", "QC", "NF", "MF", "OF"]),
		);
	});

	test("a reader of GeoJSON in the files of counties, districts, states and region", () => {
		const cells = ["counties", "districts", "states", "region"].flatMap((name) =>
			json<FeatureCollection>(`${name}.geojson`).features.flatMap(
				({ properties }) => (properties as { cells: DataRecord[] }).cells,
			),
		);
		expect(byKey(cells as Row[])).toEqual(byKey(unguarded(rows)));
		for (const name of ["counties", "districts", "states", "region"]) {
			for (const { properties } of json<FeatureCollection>(`${name}.geojson`).features) {
				for (const { measure, crop, value, status } of properties!.cells as DataRecord[]) {
					expect(properties![`${measure}/${crop}`]).toBe(value);
					expect(properties![`${measure}/${crop}/status`]).toBe(status);
				}
			}
		}
	});
});

function plainCell(value: exceljs.CellValue): string | number | null {
	if (value instanceof Date) return value.toISOString().slice(0, 10);
	return (value as string | number | null | undefined) ?? null;
}

type Csvw = {
	"@context": unknown;
	tables: {
		url: string;
		tableSchema: {
			columns: { name: string; titles: string[]; datatype: unknown; required: boolean; null: string }[];
			primaryKey: string[];
			foreignKeys?: { columnReference: string[]; reference: { resource: string; columnReference: string[] } }[];
		};
	}[];
};

describe("each format keeps to its standard:", () => {
	// RFC 4180, section 2: CRLF after every record, the same number of fields in each.
	test("CSV files end their lines in CRLF, with as many fields in each", () => {
		for (const name of [...files.keys()].filter((one) => one.endsWith(".csv"))) {
			const content = text(name);
			expect(content.endsWith("\r\n"), name).toBe(true);
			expect(content.replaceAll("\r\n", ""), name).not.toMatch(/[\r\n]/);
			expect(() => parse(content, { relax_column_count: false }), name).not.toThrow();
		}
	});

	// W3C, Metadata Vocabulary for Tabular Data (2015), sections 5.3 to 5.6.
	test("CSVW metadata names every column of every table, and its keys hold in the rows", () => {
		const metadata = json<Csvw>("csv-metadata.json");
		expect(metadata["@context"]).toEqual(["http://www.w3.org/ns/csvw", { "@language": "en" }]);
		for (const { url, tableSchema } of metadata.tables) {
			const all = parse(text(url), { columns: true }) as Record<string, string>[];
			expect(Object.keys(all[0]!)).toEqual(tableSchema.columns.flatMap(({ titles }) => titles));
			for (const { name } of tableSchema.columns.filter((column) => column.required)) {
				expect(
					all.filter((row) => row[name] === ""),
					`${url} ${name}`,
				).toEqual([]);
			}
			expect(new Set(all.map((row) => tableSchema.primaryKey.map((key) => row[key]).join("|"))).size).toBe(all.length);
			for (const { columnReference, reference } of tableSchema.foreignKeys ?? []) {
				const codes = parse(text(reference.resource), { columns: true }) as Record<string, string>[];
				const known = new Set(codes.map((row) => row[reference.columnReference[0]!]));
				expect(all.filter((row) => !known.has(row[columnReference[0]!]))).toEqual([]);
			}
		}
	});

	test("the data package meets the profile, and its sums are those of the files", () => {
		const ajv = new Ajv({ strict: false });
		addFormats(ajv);
		const meets = ajv.compile(dataPackageProfile);
		const descriptor = json<{ resources: { path: string; bytes: number; hash: string }[] }>("datapackage.json");
		expect(meets(descriptor), JSON.stringify(meets.errors)).toBe(true);
		expect(meets({ ...descriptor, resources: undefined })).toBe(false);
		expect(meets({ ...descriptor, resources: [{ ...descriptor.resources[0], path: "../cells.csv" }] })).toBe(false);
		for (const { path, bytes: size, hash } of descriptor.resources) {
			expect(size).toBe(bytes(path).length);
			expect(hash).toBe(`sha256:${createHash("sha256").update(bytes(path)).digest("hex")}`);
		}
	});

	// SDMX-CSV 2.0 field guide: header, structure reference and action; SDMX 3.0 technical notes: IDType, TIME_PERIOD.
	test("SDMX-CSV has its columns in order, and every code is in a list of the structure", () => {
		const [header, first] = parse(text("cells.sdmx.csv")) as string[][];
		expect(header!.slice(0, 9)).toEqual([
			"STRUCTURE",
			"STRUCTURE_ID",
			"ACTION",
			"FREQ",
			"REF_AREA",
			"TIME_PERIOD",
			"CROP",
			"MEASURE",
			"OBS_VALUE",
		]);
		expect(first![0]).toBe("datastructure");
		expect(first![1]).toMatch(/^[A-Z]+:[A-Z0-9_]+\(\d+\.\d+\.\d+\)$/);
		const { data } = json<{ data: { codelists: { id: string; codes: { id: string }[] }[] } }>("sdmx-structure.json");
		const lists = new Map(data.codelists.map(({ id, codes }) => [id, new Set(codes.map((code) => code.id))]));
		for (const codes of lists.values()) for (const code of codes) expect(code).toMatch(/^[A-Za-z0-9_@$-]+$/);
		const columns = { FREQ: "FREQ", REF_AREA: "AREA", CROP: "CROP", MEASURE: "MEASURE", UNIT_MEASURE: "UNIT" };
		const all = parse(text("cells.sdmx.csv"), { columns: true }) as Record<string, string>[];
		for (const [column, list] of Object.entries({ ...columns, OBS_STATUS: "OBS_STATUS", CONF_STATUS: "CONF_STATUS" })) {
			expect(
				all.filter((row) => !lists.get(`CL_${list}`)!.has(row[column]!)),
				column,
			).toEqual([]);
		}
		expect(all.every(({ TIME_PERIOD }) => /^\d{4}$/.test(TIME_PERIOD!))).toBe(true);
	});

	// RFC 7946: 3.1.6 closed rings and right-hand rule, 4 WGS 84 without `crs`, 11.2 precision.
	test("GeoJSON files are sound: rings closed and wound right, degrees in range, no crs", () => {
		for (const name of ["counties", "districts", "states", "region"]) {
			const content = text(`${name}.geojson`);
			expect(() => check(content), name).not.toThrow();
			expect(content).not.toContain('"crs"');
			const { features } = JSON.parse(content) as { features: Feature<Polygon | MultiPolygon>[] };
			expect(features.length).toBeGreaterThan(0);
			for (const { geometry } of features) for (const rings of polygons(geometry)) checkRings(rings);
		}
	});
});

const polygons = ({ type, coordinates }: Polygon | MultiPolygon): Position[][][] =>
	type === "Polygon" ? [coordinates] : coordinates;

function checkRings(rings: Position[][]): void {
	for (const [at, ring] of rings.entries()) {
		expect(ring.length).toBeGreaterThanOrEqual(4);
		expect(ring.at(-1)).toEqual(ring[0]);
		const area = ring.slice(1).reduce((sum, [x, y], index) => {
			const [fromX, fromY] = ring[index]!;
			return sum + (fromX! * y! - x! * fromY!);
		}, 0);
		expect(Math.sign(area)).toBe(at === 0 ? 1 : -1);
		for (const [longitude, latitude] of ring) {
			expect(Math.abs(longitude!)).toBeLessThanOrEqual(180);
			expect(Math.abs(latitude!)).toBeLessThanOrEqual(90);
		}
	}
}

/** All bytes that a file gives when it is opened: packed formats are unpacked first. */
function opened(name: string, content: Buffer): Buffer {
	if (!/\.(zip|xlsx)$/.test(name)) return content;
	return Buffer.concat(Object.entries(unzipSync(content)).map(([inner, part]) => opened(inner, Buffer.from(part))));
}

test("no file of a release holds a number of a withheld cell", async () => {
	const hidden = await addOddRelease(owner, 2032);
	// The tables refuse such a number; here their guard is taken away, so that the files alone must keep it back.
	await owner.query("alter table release.figure disable trigger figure_of_shown_cell");
	await owner.query(
		"insert into release.figure values ($1, 'crop_loss', 'apple', '19113', $2, 1.0625, 0.1, 70, 76, 'steady')",
		[hidden.releaseId, secret],
	);
	await owner.query("alter table release.figure enable trigger figure_of_shown_cell");
	const there = await owner.query("select from release.figure where release_id = $1 and value = $2", [
		hidden.releaseId,
		secret,
	]);
	expect(there.rowCount).toBe(1);

	await makeReleaseFiles(hidden);
	const { rows: made } = await owner.query<{ name: string; content: Buffer }>(
		"select name, content from release.file where release_id = $1",
		[hidden.releaseId],
	);
	expect(made.length).toBe(files.size);
	const asDouble = Buffer.alloc(8);
	asDouble.writeDoubleLE(secret);
	for (const { name, content } of made) {
		const all = opened(name, content);
		expect(all.includes(`${secret}`), name).toBe(false);
		expect(all.includes("1.0625"), name).toBe(false);
		expect(all.includes(asDouble), name).toBe(false);
	}
	// The search finds what is there: a shown cell's number, as text and as a double.
	const shownDouble = Buffer.alloc(8);
	shownDouble.writeDoubleLE(1e21);
	expect(opened("cells.parquet", bytes("cells.parquet")).includes(shownDouble)).toBe(true);
	expect(opened("cells.xlsx", bytes("cells.xlsx")).includes("<v>38</v>")).toBe(true);
});

const csv = () => bytes("cells.csv");
const get = async (headers: Record<string, string> = {}, method = "GET") => {
	const file = (await listFiles(release.releaseId)).find(({ name }) => name === "cells.csv")!;
	const request = new Request("https://survey.example/file", { headers, method });
	return serveFile(request, release.releaseId, file, { name: "cells.csv", visibility: "public" });
};

describe("a file is served", () => {
	test("whole, with its length, its type and its checksum as its tag", async () => {
		const response = await get();
		expect(response.status).toBe(200);
		expect(Buffer.from(await response.arrayBuffer()).equals(csv())).toBe(true);
		expect(response.headers.get("content-length")).toBe(`${csv().length}`);
		expect(response.headers.get("content-type")).toBe("text/csv; charset=utf-8; header=present");
		const head = await get({}, "HEAD");
		expect([head.status, await head.text(), head.headers.get("content-length")]).toEqual([200, "", `${csv().length}`]);
		const again = await get({ "if-none-match": response.headers.get("etag")! });
		expect([again.status, await again.text()]).toEqual([304, ""]);
	});

	// RFC 9110, section 14: the forms of a range, and which of them cannot be satisfied.
	test.each<[string, number, number, number]>([
		["bytes=0-9", 206, 0, 10],
		["bytes=5-", 206, 5, Infinity],
		["bytes=-7", 206, -7, Infinity],
		["bytes=3-99999999", 206, 3, Infinity],
		["bytes=-0", 416, 0, 0],
		["bytes=99999999-", 416, 0, 0],
		["bytes=9-3", 200, 0, Infinity],
		["bytes=0-1,4-5", 200, 0, Infinity],
		["lines=1-2", 200, 0, Infinity],
	])("in the part %s with status %i", async (range, status, from, to) => {
		const response = await get({ range });
		expect(response.status).toBe(status);
		const wanted = csv().subarray(from, to === Infinity ? undefined : to);
		expect(Buffer.from(await response.arrayBuffer()).equals(wanted)).toBe(true);
		const size = csv().length;
		const first = from < 0 ? size + from : from;
		const last = to === Infinity ? size - 1 : to - 1;
		const contentRange = { 200: null, 206: `bytes ${first}-${last}/${size}`, 416: `bytes */${size}` }[status];
		expect(response.headers.get("content-range")).toBe(contentRange);
	});

	test("whole when the asker's part is of another version", async () => {
		expect((await get({ range: "bytes=0-9", "if-range": '"other"' })).status).toBe(200);
		const { etag } = Object.fromEntries((await get()).headers);
		expect((await get({ range: "bytes=0-9", "if-range": etag! })).status).toBe(206);
	});
});

test("a withdrawn release shows its files to nobody, and gets none made", async () => {
	const gone = await addReleaseWithFiles(owner, 2033);
	const never = await addOddRelease(owner, 2034);
	expect((await listFiles(gone.releaseId)).length).toBeGreaterThan(0);
	for (const { releaseId } of [gone, never]) {
		await owner.query(
			`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
			[releaseId],
		);
	}
	await makeReleaseFiles(never);
	const kept = await owner.query("select distinct release_id from release.file where release_id = any($1)", [
		[gone.releaseId, never.releaseId],
	]);
	expect(kept.rows).toEqual([{ release_id: gone.releaseId }]);
	expect(await listFiles(gone.releaseId)).toEqual([]);
});
