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
import type { FeatureCollection } from "geojson";
import { parquetReadObjects } from "hyparquet";
import type { Client } from "pg";
import { type LoaderFunctionArgs, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { type Visitor, visitorContext } from "#app/auth/visitor.server.ts";
import { i18nextMiddleware } from "#app/i18n/middleware.server.ts";
import { columnType, type DataColumn, dataColumns, type DataRecord } from "#app/publish/data-file.ts";
import { loader as cellsLoader } from "#app/routes/api/v1/cells.ts";
import { loader as fileLoader } from "#app/routes/dataroom/table-file.ts";
import { loader as pageLoader } from "#app/routes/dataroom/tables.tsx";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { dataPackageProfile } from "./data-package-profile.ts";
import { addRelease, secret } from "./publish-fixture.ts";
import { addOddRelease } from "./released-files-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "./surveys-fixture.ts";

type Row = Record<string, string | number | null>;

let database: TestDatabase;
let owner: Client;
let personId: string;
let [first, second]: { releaseId: string; number: number }[] = [];
/** All measures and crops of two seasons, in counties of Iowa, in the whole network, and in one county by its name. */
let choice: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	first = await addOddRelease(owner, 2031);
	second = await addOddRelease(owner, 2032);
	({ personId } = await addPerson(owner, "Jonas Weir", []));
	choice = `release=${first.number},${second.number}&measure=crop_loss,yield_per_tree,first_bloom.day&crop=apple,plum&kind=region,county&state=19&area=01001&layout=wide&columns=season&show=error,interval`;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

type Asker = { researcher?: boolean; headers?: Record<string, string> };

async function run<T>(
	work: (args: never) => Promise<T>,
	address: string,
	params = {},
	{ researcher = true, headers = {} }: Asker = {},
): Promise<T> {
	const request = new Request(`https://survey.example${address}`, { headers });
	const context = new RouterContextProvider();
	const person = { personId, displayName: "Jonas Weir", email: null, language: null };
	const grants = { coordinator: false, researcher, stateFips: [], operationIds: [] };
	context.set(visitorContext, { person, grants, link: null } satisfies Visitor);
	const args = { request, context, params } as unknown as LoaderFunctionArgs;
	let result: T | undefined;
	await i18nextMiddleware(args as never, async () => {
		result = await work(args as never);
		return new Response();
	});
	return result as T;
}

async function page(search: string, researcher = true) {
	const { data, init } = await run(pageLoader, `/dataroom/tables?${search}`, {}, { researcher });
	return { ...data, status: init?.status };
}
const take = (file: string, search = choice, researcher = true) =>
	run(fileLoader, `/dataroom/tables/${file}?${search}`, { file }, { researcher });
const taken = new Map<string, Promise<Buffer>>();
/** Each file of a table is taken once. */
function bytes(file: string, search = choice): Promise<Buffer> {
	const key = `${file} ${search}`;
	const one = taken.get(key) ?? take(file, search).then(async (answer) => Buffer.from(await answer.arrayBuffer()));
	taken.set(key, one);
	return one;
}
const text = async (file: string) => (await bytes(file)).toString("utf8");
const json = async <T>(file: string) => JSON.parse(await text(file)) as T;

/** The cells as anybody has them of the data API, by the addresses that the page tells. */
async function apiRows(addresses: string[]): Promise<Row[]> {
	const rows: Row[] = [];
	for (const address of addresses) {
		const release = /releases\/(\d+)/.exec(address)![1]!;
		const response = (await run(cellsLoader as never, address, { release })) as unknown as Response;
		expect(response.status, address).toBe(200);
		const { data, next } = (await response.json()) as { data: Row[]; next: string | null };
		expect(next).toBeNull();
		rows.push(...data);
	}
	return rows;
}
const keyOf = (row: Row) => `${row.release}|${row.measure}|${row.crop}|${row.area_code}`;
const byKey = (rows: Row[]) => [...new Map(rows.map((row) => [keyOf(row), row]))].toSorted().map(([, row]) => row);
let given: Promise<Row[]> | undefined;
const inFile = () => (given ??= page(choice).then(async ({ addresses }) => byKey(await apiRows(addresses))));

const isNumber = (column: string) => ["integer", "number"].includes(columnType(column as DataColumn));
const typed = (row: Record<string, string>): Row =>
	Object.fromEntries(
		Object.entries(row).map(([column, value]) => [
			column,
			value === "" ? null : isNumber(column) ? Number(value) : value,
		]),
	);
/** A text that a spreadsheet would run is led by an apostrophe in CSV. */
const unguarded = (row: Row): Row => ({ ...row, area_name: String(row.area_name).replace(/^'=/, "=") });

describe("a table", () => {
	test("shows each released cell of its choice once, as the data API gives it", async () => {
		const { table, addresses, status, problems } = await page(choice);
		expect([status, problems]).toEqual([200, []]);
		const shown = table!.rows.flatMap(({ cells }) => cells.filter((cell) => cell !== null)) as unknown as Row[];
		expect(shown.length).toBe(table!.cellCount);
		expect(byKey(shown)).toEqual(byKey(await apiRows(addresses)));
		expect(new Set(shown.map((row) => row.status))).toEqual(new Set(["A", "Q", "N", "M", "O"]));
		for (const row of shown.filter((one) => one.status !== "A"))
			expect([row.value, row.standard_error, row.lower, row.upper]).toEqual([null, null, null, null]);
		// Alabama is no state of the choice: its county is there by its name, the network in spite of the states.
		expect(new Set(shown.map((row) => row.area_code))).toEqual(
			new Set(["network", "19103", "19113", "19153", "19169", "01001"]),
		);
		expect(table!.columns.map(({ at }) => at.season)).toEqual([`${first!.number}`, `${second!.number}`]);
	});

	test("is the same by its own address, however it was asked for", async () => {
		const asked = new URLSearchParams(choice);
		const oneByOne = [...asked].flatMap(([name, values]) => values.split(",").map((value) => `${name}=${value}`));
		const { search, table } = await page(oneByOne.toReversed().join("&"));
		const again = await page(search);
		expect([again.search, (await page(choice)).search]).toEqual([search, search]);
		expect([...again.table!.rows].length).toBe(table!.rows.length);
		const long = await page(choice.replace("layout=wide", "layout=long"));
		expect(long.table!.rowCount).toBe(long.table!.cellCount);
	});

	test("begins with a choice that shows figures, and anybody signed in may look but not take files", async () => {
		const { table, problems } = await page("", false);
		expect(problems).toEqual([]);
		expect(table!.cellCount).toBeGreaterThan(0);
		await expect(take("cells.csv", choice, false)).rejects.toMatchObject({ data: { code: "role_needed" } });
	});
});

describe("in every format a table holds the same cells:", () => {
	test("CSV, alone and in the archive with its checksums", async () => {
		const rows = parse(await text("cells.csv"), { columns: true }) as Record<string, string>[];
		expect(byKey(rows.map(typed).map(unguarded))).toEqual(await inFile());
		const archive = Object.entries(unzipSync(await bytes("table.zip")));
		const sums = archive.find(([name]) => name.endsWith("SHA256SUMS"))!;
		const lines = Buffer.from(sums[1]).toString("utf8").trimEnd().split("\n");
		const made = archive.filter(([name]) => !name.endsWith("SHA256SUMS"));
		expect(lines).toEqual(
			made.map(([name, content]) => `${createHash("sha256").update(content).digest("hex")}  ${name.split("/")[1]}`),
		);
		for (const [path, content] of made) {
			const name = path.split("/")[1]!;
			// A workbook's own parts are packed with the moment of packing.
			if (name !== "cells.xlsx") expect(Buffer.from(content).equals(await bytes(name)), name).toBe(true);
		}
	});

	test("Parquet, to two readers", async () => {
		const content = await bytes("cells.parquet");
		const file = content.buffer.slice(content.byteOffset, content.byteOffset + content.length) as ArrayBuffer;
		const rows = (await parquetReadObjects({ file })).map((row) => plain(row));
		expect(byKey(rows)).toEqual(await inFile());
		const path = join(await mkdtemp(join(tmpdir(), "table-files-")), "cells.parquet");
		await writeFile(path, content);
		const connection = await (await DuckDBInstance.create(":memory:")).connect();
		const read = await connection.runAndReadAll(`select release, status, count(value)::int as n, sum(value) as total
			from '${path}' group by all order by all`);
		connection.closeSync();
		const wanted = new Map<string, { n: number; total: number | null }>();
		for (const row of await inFile()) {
			const of = wanted.get(`${row.release} ${row.status}`) ?? { n: 0, total: null };
			if (row.value !== null) [of.n, of.total] = [of.n + 1, (of.total ?? 0) + Number(row.value)];
			wanted.set(`${row.release} ${row.status}`, of);
		}
		const told = read
			.getRowObjectsJson()
			.map(({ release, status, n, total }) => [`${String(release)} ${String(status)}`, { n, total }]);
		expect(Object.fromEntries(told)).toEqual(Object.fromEntries(wanted));
	});

	test("a workbook", async () => {
		const book = new exceljs.Workbook();
		await book.xlsx.load((await bytes("cells.xlsx")) as never);
		const sheet = book.getWorksheet("cells")!;
		const rows: Row[] = [];
		sheet.eachRow((row, index) => {
			if (index > 1)
				rows.push(plain(Object.fromEntries(dataColumns.map((name, at) => [name, row.getCell(at + 1).value ?? null]))));
		});
		expect(byKey(rows)).toEqual(await inFile());
	});

	test("SDMX-CSV, with the release among its dimensions and every code in a list", async () => {
		const lines = parse(await text("cells.sdmx.csv"), { columns: true }) as Record<string, string>[];
		const told = lines.map((line) => ({
			release: Number(line.RELEASE),
			measure: line.MEASURE!.replaceAll("-", "."),
			crop: line.CROP!,
			area_code: line.REF_AREA!,
			value: line.OBS_VALUE === "NaN" ? null : Number(line.OBS_VALUE),
			status: line.OBS_STATUS!,
		}));
		const same = Object.keys(told[0]!);
		const rows = (await inFile()).map((row) => Object.fromEntries(same.map((name) => [name, row[name]])) as Row);
		expect(byKey(told)).toEqual(rows);
		expect(lines.filter((line) => (line.OBS_STATUS === "Q") !== (line.CONF_STATUS === "C"))).toEqual([]);
		type Structure = { data: { codelists: { id: string; codes: { id: string }[] }[] } };
		const { data } = await json<Structure>("sdmx-structure.json");
		const lists = new Map(data.codelists.map(({ id, codes }) => [id, codes.map((code) => code.id)]));
		expect(lists.get("CL_RELEASE")).toEqual([`${first!.number}`, `${second!.number}`]);
		for (const [column, list] of [
			["REF_AREA", "CL_AREA"],
			["CROP", "CL_CROP"],
			["MEASURE", "CL_MEASURE"],
		] as const) {
			expect(new Set(lists.get(list))).toEqual(new Set(lines.map((line) => line[column])));
			expect(lists.get(list)!.length).toBe(new Set(lists.get(list)).size);
		}
	});

	test("GeoJSON, a file for each level, sound and with the release in its flat names", async () => {
		const cells: Row[] = [];
		for (const name of ["counties.geojson", "region.geojson"]) {
			const content = await text(name);
			expect(() => check(content), name).not.toThrow();
			for (const { properties } of (JSON.parse(content) as FeatureCollection).features) {
				for (const cell of properties!.cells as DataRecord[]) {
					const flat = `${cell.release}/${cell.measure}/${cell.crop}`;
					expect([properties![flat], properties![`${flat}/status`]]).toEqual([cell.value, cell.status]);
					cells.push(cell as unknown as Row);
				}
			}
		}
		expect(byKey(cells)).toEqual(await inFile());
		await expect(take("states.geojson")).rejects.toMatchObject({ data: { code: "page_not_found" } });
	});

	test("the table as it is laid out, each figure with its status", async () => {
		const [header, ...lines] = parse(await text("table.csv")) as string[][];
		const { table } = await page(choice);
		expect(lines.length).toBe(table!.rowCount);
		for (const { number } of [first!, second!]) {
			const [value, status] = ["value", "status"].map((part) => header!.indexOf(`${number}/${part}`));
			const codes = ["measure", "crop", "area_code"].map((name) => header!.indexOf(name));
			const told = lines.map((line) => {
				const [measure, crop, area] = codes.map((at) => line[at]!);
				return { key: `${number}|${measure}|${crop}|${area}`, value: line[value!]!, status: line[status!] };
			});
			const rows = (await inFile()).filter(({ release }) => release === number);
			expect(told.toSorted((a, b) => (a.key < b.key ? -1 : 1))).toEqual(
				rows.map((row) => ({ key: keyOf(row), value: row.value === null ? "" : `${row.value}`, status: row.status })),
			);
		}
	});
});

const plain = (row: Record<string, unknown>): Row =>
	Object.fromEntries(
		Object.entries(row).map(([name, value]) => [
			name,
			value instanceof Date ? value.toISOString().slice(0, 10) : ((value ?? null) as Row[string]),
		]),
	);

const codes = (row: Record<string, string>, names: string[]) => names.map((name) => row[name]).join("|");
const read = async (name: string) => parse(await text(name), { columns: true }) as Record<string, string>[];

test("the CSV files' keys hold, within each release, and their descriptor meets the profile", async () => {
	type Reference = { columnReference: string[]; reference: { resource: string; columnReference: string[] } };
	type Csvw = { tables: { url: string; tableSchema: { primaryKey: string[]; foreignKeys?: Reference[] } }[] };
	const { tables } = await json<Csvw>("csv-metadata.json");
	expect(tables.map(({ url }) => url)).toContain("releases.csv");
	for (const { url, tableSchema } of tables) {
		const rows = await read(url);
		expect(rows.length, url).toBeGreaterThan(0);
		expect(new Set(rows.map((row) => codes(row, tableSchema.primaryKey))).size, url).toBe(rows.length);
		for (const { columnReference, reference } of tableSchema.foreignKeys ?? []) {
			const known = new Set((await read(reference.resource)).map((row) => codes(row, reference.columnReference)));
			expect(rows.filter((row) => !known.has(codes(row, columnReference)))).toEqual([]);
		}
	}
	const ajv = new Ajv({ strict: false });
	addFormats(ajv);
	const meets = ajv.compile(dataPackageProfile);
	const descriptor = await json<{ resources: { path: string; hash: string }[] }>("datapackage.json");
	expect(meets(descriptor), JSON.stringify(meets.errors)).toBe(true);
	for (const { path, hash } of descriptor.resources)
		expect(hash).toBe(
			`sha256:${createHash("sha256")
				.update(await bytes(path))
				.digest("hex")}`,
		);
});

test("a file that is taken is recorded for each of its releases, and one that is still the same is not", async () => {
	const before = (await owner.query("select max(download_id) as last from log.download")).rows[0].last ?? 0;
	const response = await take("codebook.csv");
	expect(response.headers.get("content-disposition")).toMatch(/filename="tallygrove-table-[0-9a-f]{10}-codebook\.csv"/);
	const { rows } = await owner.query(
		"select person_id, release_id, file_key from log.download where download_id > $1 order by download_id",
		[before],
	);
	expect(rows).toEqual(
		[first!, second!].map(({ releaseId }) => ({
			person_id: personId,
			release_id: releaseId,
			file_key: "table codebook.csv",
		})),
	);
	const again = await run(
		fileLoader,
		`/dataroom/tables/codebook.csv?${choice}`,
		{ file: "codebook.csv" },
		{ researcher: true, headers: { "if-none-match": response.headers.get("etag")! } },
	);
	expect([again.status, await again.text()]).toEqual([304, ""]);
	const after = await owner.query("select from log.download where download_id > $1", [before]);
	expect(after.rowCount).toBe(2);
});

test("no page and no file of a table holds a number of a withheld cell", async () => {
	const hidden = await addOddRelease(owner, 2033);
	// The tables refuse such a number; here their guard is taken away, so that what is made of them must keep it back.
	await owner.query("alter table release.figure disable trigger figure_of_shown_cell");
	await owner.query(
		"insert into release.figure values ($1, 'crop_loss', 'apple', '19113', $2, 1.0625, 0.1, 70, 76, 'steady')",
		[hidden.releaseId, secret],
	);
	await owner.query("alter table release.figure enable trigger figure_of_shown_cell");
	const there = await owner.query("select from release.figure where value = $1", [secret]);
	expect(there.rowCount).toBe(1);
	const search = `release=${hidden.number}&measure=crop_loss&crop=apple&kind=county&layout=wide&columns=crop`;
	const told = await page(search);
	expect(told.table!.map).not.toBeNull();
	expect(JSON.stringify(told)).not.toContain(`${secret}`);
	const asDouble = Buffer.alloc(8);
	asDouble.writeDoubleLE(secret);
	for (const [name, content] of Object.entries(unzipSync(await bytes("table.zip", search)))) {
		const parts = name.endsWith(".xlsx") ? Object.values(unzipSync(content)) : [content];
		for (const part of parts.map((one) => Buffer.from(one))) {
			expect(part.includes(`${secret}`), name).toBe(false);
			expect(part.includes(asDouble), name).toBe(false);
		}
	}
});

const codesOf = async (search: string) => {
	const { problems, status, selection } = await page(search);
	expect(status).toBe(400);
	return { problems: problems.map(({ field, code }) => `${field} ${code}`), selection };
};

describe("what an address asks for wrongly is said of its field, and the rest stays:", () => {
	test.each<[string, (from: string) => string, string]>([
		["an unknown figure", (from) => from.replace("measure=", "measure=made_up,"), "measure codes_unknown"],
		["a script for a crop", (from) => from.replace("crop=apple", "crop=apple,<script>"), "crop codes_unknown"],
		["an unknown release", (from) => from.replace("release=", "release=99999,0,-1,"), "release codes_unknown"],
		["an unknown county", (from) => from.replace("area=01001", "area=01001,99999"), "area codes_unknown"],
		["an unknown layout", (from) => from.replace("layout=wide", "layout=tall"), "layout choice_wrong"],
		["no figure", (from) => from.replace(/measure=[^&]+/, ""), "measure choose_some"],
		["nothing across", (from) => from.replace("columns=season", "columns="), "columns choose_some"],
		[
			"everything across",
			(from) => from.replace("columns=season", "columns=season,measure,crop,area"),
			"columns rows_left",
		],
		[
			"hundreds of codes",
			(from) => `${from}&area=${Array.from({ length: 900 }, (_, i) => `x${i}`).join(",")}`,
			"area codes_unknown",
		],
	])("%s", async (_, spoil, problem) => {
		const { problems, selection } = await codesOf(spoil(choice));
		expect(problems).toContain(problem);
		expect(selection.crop).toEqual(["apple", "plum"]);
		expect(selection.release).toEqual([first!.number, second!.number]);
		// A file tells nobody that something was left out of it.
		await expect(take("cells.csv", spoil(choice))).rejects.toMatchObject({ data: { code: "form_not_understood" } });
	});

	test("a withdrawn release, whose figures are served to nobody", async () => {
		const gone = await addRelease(owner, 2034);
		await owner.query(
			`insert into release.withdrawal (release_id, reason) values ($1, '{"en": "Wrong.", "es": "Mal."}')`,
			[gone.releaseId],
		);
		const { problems, selection } = await codesOf(choice.replace("release=", `release=${gone.number},`));
		expect(problems).toEqual(["release release_gone"]);
		expect(selection.release).not.toContain(gone.number);
	});
});

test("what differs between the releases of a table is told with their numbers", async () => {
	const other = await addRelease(owner, 2036);
	for (const table of ["release", "area", "measure"])
		await owner.query(`alter table release.${table} disable trigger frozen`);
	await owner.query(
		"update release.release set form_key = 'bloom_watch', rules = rules || '{\"minimumOwners\": 6}', code_version = 'later' where release_id = $1",
		[other.releaseId],
	);
	await owner.query("update release.area set parent_key = '19' where release_id = $1 and area_key = '19113'", [
		other.releaseId,
	]);
	await owner.query("update release.measure set decimals = 1 where release_id = $1 and measure_key = 'crop_loss'", [
		other.releaseId,
	]);
	for (const table of ["release", "area", "measure"])
		await owner.query(`alter table release.${table} enable trigger frozen`);
	const search = `release=${first!.number},${other.number}&measure=crop_loss,first_bloom.day&crop=apple&kind=district&layout=wide&columns=season`;
	const { notes } = await page(search);
	const apart = [{ releases: [first!.number] }, { releases: [other.number] }];
	expect(notes).toEqual([
		{ kind: "form", groups: apart },
		{ kind: "unit", of: "crop_loss", groups: apart },
		{ kind: "wording", of: "crop_loss", groups: apart },
		{ kind: "missing", of: "first_bloom.day", groups: [{ releases: [other.number] }] },
		{
			kind: "setting",
			of: "minimumOwners",
			groups: [
				{ releases: [first!.number], value: 5 },
				{ releases: [other.number], value: 6 },
			],
		},
		{ kind: "code", groups: apart },
		{ kind: "counties", groups: apart },
		{ kind: "districts", groups: apart },
	]);
	expect((await page(search.replace(`,${other.number}`, ""))).notes).toEqual([]);
});

test("a table in which two things vary has a chart a season, on one scale of figures as released", async () => {
	const { table } = await page(
		`release=${first!.number},${second!.number}&measure=crop_loss&crop=apple&kind=county&state=19&columns=season`,
	);
	const charts = table?.charts;
	if (!charts || typeof charts === "string") throw new Error(`no chart: ${charts}`);
	expect(charts.map(({ season, drawn }) => [season, drawn.chart])).toEqual([
		[2032, "areas"],
		[2031, "areas"],
	]);
	const { table: one } = await page(
		`release=${first!.number}&measure=crop_loss&crop=apple&kind=county&state=19&columns=season`,
	);
	expect(one?.charts).toEqual([{ ...charts[1]!, key: "" }]);
	const { table: more } = await page(
		`release=${first!.number},${second!.number}&measure=crop_loss,yield_per_tree&crop=apple&kind=county&state=19&columns=season`,
	);
	expect(more?.charts).toBe("several");
});
