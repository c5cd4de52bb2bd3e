import { parse } from "csv-parse/sync";
import type { Client } from "pg";
import { createElement } from "react";
import { createInstance } from "i18next";
import { renderToStaticMarkup } from "react-dom/server";
import { I18nextProvider } from "react-i18next";
import { createRoutesStub } from "react-router";
import sharp from "sharp";
import { afterAll, beforeAll, expect, test } from "vitest";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { countyFeatures } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { formatterFor } from "#app/lib/format.ts";
import { pageOf } from "#app/lib/page-of.ts";
import type { MapCell } from "#app/publish/cell.ts";
import { dataColumns } from "#app/publish/data-file.ts";
import { readMapQuery } from "#app/publish/map-choice.ts";
import { findMapView, isView } from "#app/publish/map-view.server.ts";
import { tableRows } from "#app/publish/table-rows.ts";
import { loader as fileLoader } from "#app/routes/public/map-file.ts";
import { loader as figuresLoader } from "#app/routes/public/map-figures.ts";
import { MapTable } from "#app/routes/public/parts/map-table.tsx";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease, secret } from "./publish-fixture.ts";
import { connectOwner, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let earlier: { releaseId: string; number: number };
let later: typeof earlier;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	earlier = await addRelease(owner, 2030);
	later = await addRelease(owner, 2031);
	await addCounties(later.releaseId);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const added = countyFeatures(usTopology(), ["19"]).features.filter(
	({ id }) => !["19103", "19113", "19153", "19169"].includes(String(id)),
);

/** The rest of Iowa, each county in one of the ways in which a cell can be told. */
async function addCounties(releaseId: string): Promise<void> {
	await owner.query("alter table release.cell disable trigger cell_as_audited");
	for (const [index, { id, properties }] of added.entries()) {
		const status = ["shown", "shown", "shown", "withheld", "no_growers", "shown"][index % 6]!;
		const band = status === "shown" ? "5-9" : null;
		await owner.query("insert into release.area values ($1, $2, 'county', '19', '19', $3)", [
			releaseId,
			id,
			properties.name,
		]);
		await owner.query("insert into release.cell (release_id, crop_key, area_key, status, respondents_band) values ($1, 'apple', $2, $3, $4)", [releaseId, id, status, band]); // prettier-ignore
		// The sixth is shown and has no figure of this measure; the third is too rough.
		if (status !== "shown" || index % 6 === 5) continue;
		const value = index % 6 === 2 ? null : index + 0.4;
		const figure = value === null ? [null, null, null, null, null, "rough"] : [value, 1, 0.1, value - 1, value + 2, index % 2 ? "steady" : "care"]; // prettier-ignore
		await owner.query(
			`insert into release.figure (release_id, measure_key, crop_key, area_key, value, standard_error, cv, lower_bound, upper_bound, steadiness)
			values ($1, 'crop_loss', 'apple', $2, $3, $4, $5, $6, $7, $8)`,
			[releaseId, id, ...figure],
		);
	}
	await owner.query("alter table release.cell enable trigger cell_as_audited");
}

const address = (more = "") => `measure=crop_loss&crop=apple&release=${later.number}${more}`;
function get(file: string, search: string, headers: Record<string, string> = {}): Promise<Response> {
	const request = new Request(`https://survey.example/map/${file}?${search}`, { headers });
	return fileLoader({ request, params: { file }, context: {} } as never);
}
const svgOf = async (search: string) => (await get("map.svg", search)).text();
const plain = (text: string) => text.replaceAll("\u00a0", " ").replaceAll("&#x27;", "'").replace(/<[^>]+>/g, " ").replace(/\s+/g, " ").trim(); // prettier-ignore

const nothing = () => undefined;
const numbers = (rows: MapCell[]) => rows.flatMap(({ look, value }) => (look === "number" ? [value!] : []));

/** The lines of the table beneath the map, by county: the figure with its range, how sure, and how many answered. */
async function tableOf(rows: MapCell[], measure: never): Promise<Map<string, string>> {
	const words = createInstance();
	await words.init({ ...i18nextSettings, resources, lng: "en" });
	const map = {
		table: pageOf(rows, 1, rows.length),
		measure,
		kind: "county",
		query: readMapQuery("https://survey.example/map"),
	};
	const table = createElement(MapTable, { map, title: "t", onPoint: nothing, onChoose: nothing });
	const page = createRoutesStub([{ path: "/", Component: () => table }]);
	const markup = renderToStaticMarkup(createElement(I18nextProvider, { i18n: words }, createElement(page)));
	const lines = markup.split("<tr").slice(2);
	return new Map(lines.map((line) => [/data-area="(\d+)"/.exec(line)?.[1] ?? "", plain(`<tr${line}`)]));
}

test("map, drawing, table and file tell the same of every county", async () => {
	const view = await findMapView(readMapQuery(`https://survey.example/map?${address()}`));
	if (!isView(view)) throw new Error("the release has a map");
	const served = await figuresLoader({
		request: new Request("https://survey.example/map/figures"),
		params: { release: `${later.number}`, measure: "crop_loss", crop: "apple" },
	} as never);
	const { cells } = (await served.json()) as { cells: MapCell[] };
	const drawn = [...(await svgOf(address("&lang=en"))).matchAll(/<title>([^<]+: [^<]+)<\/title>/g)].map(([, said]) => plain(said!)); // prettier-ignore
	const table = await tableOf(view.figures.cells, view.figures.measure as never);
	const csv = parse(await (await get("map.csv", address("&lang=en"))).text(), { columns: true }) as Record<
		string,
		string
	>[];
	const rows = new Map(csv.map((row) => [row.area_code, row]));

	expect(cells).toHaveLength(99);
	expect([drawn.length, table.size, rows.size]).toEqual([99, 99, 99]);
	const looks = new Set(cells.map(({ look }) => look));
	expect(looks).toEqual(new Set(["number", "rough", "withheld", "no_growers", "no_figure"]));
	const said = { rough: "too rough to publish", withheld: "withheld", no_growers: "no growers", no_figure: "Not asked" }; // prettier-ignore
	const status = { number: "A", rough: "N", withheld: "Q", no_growers: "M", no_figure: "O" };
	for (const cell of cells) {
		const { areaKey, areaName, look, value, lower, upper } = cell;
		const sentence = drawn.find((one) => one.startsWith(`${areaName} County, Iowa: `)) ?? "";
		const row = rows.get(areaKey)!;
		expect(row.status, areaName).toBe(status[look]);
		expect([row.value, row.lower, row.upper], areaName).toEqual([value, lower, upper].map((one) => `${one ?? ""}`));
		const [low, high] = [lower, upper].map((one) => Math.round(one ?? 0));
		const told = look === "number" ? `${Math.round(value!)}%, likely between ${low} and ${high}%` : said[look];
		expect(sentence, areaName).toContain(told);
		expect(table.get(areaKey)?.toLowerCase(), areaName).toContain(
			look === "number" ? `${Math.round(value!)}% ${low} to ${high}%` : look === "no_growers" ? "no growers" : told.toLowerCase(), // prettier-ignore
		);
		if (look !== "number") expect(`${sentence} ${table.get(areaKey)}`, areaName).not.toMatch(/\d%/);
	}
});

test("the table sorts by value both ways, and what has no number comes last and tells nothing by its place", async () => {
	const view = await findMapView(readMapQuery(`https://survey.example/map?${address()}`));
	if (!isView(view)) throw new Error("the release has a map");
	const { compare } = formatterFor("en", ((key: string) => key) as never);
	const sorted = (direction: "asc" | "desc") =>
		tableRows(view.figures.cells, { q: "", sort: "value", direction }, compare);
	const [up, down] = [sorted("asc"), sorted("desc")];
	expect(numbers(up)).toEqual(numbers(up).toSorted((a, b) => a - b));
	expect(numbers(down)).toEqual(numbers(up).toReversed());
	const rest = (rows: MapCell[]) => rows.slice(numbers(rows).length).map(({ look, areaName }) => [look, areaName]);
	expect(rest(up)).toEqual(rest(down));
	expect(rest(up).every(([look]) => look !== "number")).toBe(true);
});

test("a picture says what it shows, counts its signs, and names release, date and citation, in both languages", async () => {
	const english = plain(await svgOf(address("&lang=en")));
	expect(english).toContain("41%");
	expect(english).toContain(`Release ${later.number}, published on`);
	expect(english).toContain(`https://survey.example/data/${later.number}`);
	expect(english).toMatch(/withheld \d+/);
	const spanish = await get("map.svg", address("&lang=es"));
	expect(spanish.headers.get("content-language")).toBe("es");
	expect(plain(await spanish.text())).toContain(`Publicación ${later.number}`);
	const two = plain(await svgOf(address(`&beside=${earlier.number}&lang=en`)));
	expect(two).toContain(`2030 (release ${earlier.number})`);
	expect(two).toContain(`2031 (release ${later.number})`);
});

test("no picture's style leaves a variable or a class without its colour", async () => {
	const svg = await svgOf(address("&lang=en&classes=fixed"));
	expect(svg).not.toMatch(/var\(|undefined|NaN/);
	const rules = /<style>(.*?)<\/style>/s.exec(svg)?.[1] ?? "";
	const used = new Set([...svg.matchAll(/class="([^"]+)"/g)].flatMap(([, names]) => names!.split(" ")));
	// Counties that are withheld are hatched by lines of their own; the name only tells them apart in tests.
	used.delete("map-withheld");
	expect(used.size).toBeGreaterThan(6);
	for (const name of used) expect(rules, name).toContain(`.${name}{`);
});

test("a withheld county's number is in the bytes of no file, though the owner has put it beside the figures", async () => {
	await owner.query("alter table release.figure disable trigger user; alter table release.figure drop constraint if exists figure_of_hidden_cell"); // prettier-ignore
	await owner.query(
		"insert into release.figure (release_id, measure_key, crop_key, area_key, value, standard_error, cv, lower_bound, upper_bound, steadiness) values ($1, 'crop_loss', 'apple', '19113', $2, 1, 0.1, 70, 76, 'steady')",
		[later.releaseId, secret],
	);
	const { rows } = await owner.query("select value from release.figure where value = $1", [secret]);
	expect(rows).toHaveLength(1);
	for (const file of ["map.svg", "map.csv"]) {
		for (const more of ["", `&beside=${earlier.number}`, "&classes=fixed", "&state=19"]) {
			const answer = await get(file, address(`${more}&lang=en`));
			expect(answer.status).toBe(200);
			const bytes = `${await answer.text()} ${[...answer.headers].flat().join(" ")}`;
			expect(bytes).toContain("Linn");
			for (const number of [`${secret}`, "73%", "70 ", "76%"]) expect(bytes.split("Linn")[1]!.slice(0, 120)).not.toContain(number); // prettier-ignore
			expect(bytes).not.toContain(`${secret}`);
		}
	}
	await owner.query("delete from release.figure where value = $1", [secret]);
	await owner.query("alter table release.figure enable trigger user");
});

test("the file of figures has the data files' columns, and both seasons' rows where the view has two", async () => {
	const answer = await get("map.csv", address(`&beside=${earlier.number}&lang=en`));
	expect(answer.headers.get("content-disposition")).toContain("attachment");
	const records = parse(await answer.text(), { columns: true }) as Record<string, string>[];
	expect(Object.keys(records[0]!)).toEqual(dataColumns);
	expect(new Set(records.map(({ season }) => season))).toEqual(new Set(["2030", "2031"]));
	expect(new Set(records.map(({ measure, area_kind }) => `${measure} ${area_kind}`))).toEqual(
		new Set(["crop_loss county"]),
	);
});

test("a file is not sent again to who has it, and another view is another version", async () => {
	for (const file of ["map.svg", "map.csv"]) {
		const etag = (await get(file, address("&lang=en"))).headers.get("etag") ?? "";
		expect(etag).toMatch(/^"[\w-]+"$/);
		const again = await get(file, address("&lang=en"), { "if-none-match": etag });
		expect([again.status, await again.text()]).toEqual([304, ""]);
		const district = await get(file, address("&lang=en&kind=district"), { "if-none-match": etag });
		expect(district.status).toBe(200);
	}
});

test("what a page would show something else for is not found as a file", async () => {
	for (const search of ["measure=acres", "crop=fig", "beside=9999", "release=9999"]) {
		const asked = new URLSearchParams(address());
		for (const [key, value] of new URLSearchParams(search)) asked.set(key, value);
		const answer = await get("map.svg", `${asked}`);
		expect([search, answer.status]).toEqual([search, 404]);
	}
	expect((await get("map.pdf", address())).status).toBe(404);
});

test("the picture as dots has the drawing's size twice over and its letters in the shipped font", async () => {
	const answer = await get("map.png", address("&lang=es"));
	expect(answer.headers.get("content-type")).toBe("image/png");
	const png = Buffer.from(await answer.arrayBuffer());
	const [, width] = /<svg[^>]* width="(\d+)"/.exec(await svgOf(address("&lang=es"))) ?? [];
	const { width: dots, height } = await sharp(png).metadata();
	expect(dots).toBe(2 * Number(width));
	const darkest = async (left: number, top: number, across: number, down: number) => {
		const part = sharp(png).extract({ left, top, width: across, height: down }).greyscale();
		return (await sharp(await part.png().toBuffer()).stats()).channels[0]!.min;
	};
	// The title's first line lies between 40 and 80 units from the top: without letters all of it would be paper.
	expect(await darkest(80, 80, dots! - 160, 80)).toBeLessThan(80);
	expect(await darkest(dots! - 60, 0, 60, height!)).toBe(255);
});
