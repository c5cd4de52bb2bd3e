import ExcelJS from "exceljs";
import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { fileHeader, listFileRows } from "#app/directory/grower-file.server.ts";
import { guessColumns, type ImportChoices } from "#app/directory/import/columns.ts";
import { chooseForMatches, listBadRows, listImportRows } from "#app/directory/import/import-rows.server.ts";
import { beginStep, createImport, dropImport, findImport, listImports } from "#app/directory/import/imports.server.ts";
import { listByIds } from "#app/directory/operation-list.server.ts";
import { importGrowers } from "#app/jobs/import-growers.server.ts";
import { toCsv } from "#app/publish/data-file.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addAssociate("Iowa's associate", ["19"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function addAssociate(name: string, states: string[]): Promise<Associate> {
	const person = await addPerson(owner, name, states);
	await owner.query(
		"insert into auth.role_grant (person_id, role, state_fips) select $1, 'associate', s from unnest($2::text[]) s",
		[person.personId, states],
	);
	return person;
}

const find = (importId: string, viewer = iowa) => asDesk(viewer, (trx) => findImport(trx, viewer, importId));

/** Reads a file as the page and the queue do it, up to where its columns are chosen. */
async function readIn(file: string | Buffer, viewer = iowa): Promise<string> {
	const bytes = typeof file === "string" ? Buffer.from(file) : file;
	const importId = await asDesk(viewer, (trx) => createImport(trx, viewer, { fileName: "list.csv", file: bytes }));
	await importGrowers({ importId, step: "read" }, true);
	return importId;
}

async function check(importId: string, viewer = iowa, more: Partial<ImportChoices> = {}) {
	const { header } = (await find(importId, viewer))!;
	const columns = guessColumns(header!) as ImportChoices["columns"];
	const choices: ImportChoices = { columns, written: "en", language: "en", areaUnit: "acre", massUnit: "lb", ...more };
	expect(await asDesk(viewer, (trx) => beginStep(trx, viewer, importId, "checking", choices))).toBe("begun");
	await importGrowers({ importId, step: "check" }, true);
	return (await find(importId, viewer))!;
}

async function step(importId: string, name: "importing" | "undoing", viewer = iowa) {
	expect(await asDesk(viewer, (trx) => beginStep(trx, viewer, importId, name))).toBe("begun");
	await importGrowers({ importId, step: name === "importing" ? "write" : "undo" }, true);
	return (await find(importId, viewer))!;
}

async function problemsOf(file: string | Buffer, viewer = iowa, more: Partial<ImportChoices> = {}) {
	const importId = await readIn(file, viewer);
	await check(importId, viewer, more);
	const rows = await asDesk(viewer, (trx) => listBadRows(trx, importId));
	return rows.map(({ number, problems }) => [number, ...problems.map(({ field, code }) => `${field} ${code}`)]);
}

let made = 0;
/** A word of one's own, so that no test finds another's growers. */
const newWord = () => `Tamarack${"abcdefghijklmnopqrstuvwxyz"[made++]}`;
const named = (word: string) => count(owner, "directory.operation where name like $1 || '%'", [word]);
/** Everything of the directory that an import can touch. */
async function directory() {
	const tables = ["owner", "operation", "planting"];
	const rows = tables.map((table) =>
		owner.query(`select to_jsonb(t) - 'updated_at' - 'trees_told_at' as row from directory.${table} t order by 1`),
	);
	return (await Promise.all(rows)).map((result) => result.rows);
}

describe("a list in a file", () => {
	test("becomes operations with owner, contact and plantings, and the log says who read it in", async () => {
		const word = newWord();
		const importId = await readIn(
			`Notes,Farm,Grower,E-mail,County,Crop,Variety,Trees,Acres,Year planted\n` +
				`x,${word} North,Ada Quill,ada@north.example,Johnson County,Apples,Haralson,"1,250",2.5,2011\n` +
				`,${word} North,,,Johnson,Plum,,40,,\n` +
				`,${word} South,Bo Wren,,"Story, IA",,,,,\n`,
		);
		expect((await check(importId)).counts).toMatchObject({ rows: 3, bad: 0, operations: 2, matched: 0, plantings: 2 });
		expect(await named(word)).toBe(0);
		expect(await step(importId, "importing")).toMatchObject({
			status: "imported",
			failure: null,
			personName: "Iowa's associate",
			counts: { made: 2, changed: 0 },
		});
		const { rows } = await owner.query(
			`select o.name, o.contact_name, w.name as owner, o.email, o.county_fips, o.language,
				(select json_agg(json_build_array(crop_key, cultivar, bearing_trees, area_acres, planted_year) order by crop_key)
				from directory.planting p where p.operation_id = o.operation_id) as plantings
			from directory.operation o join directory.owner w using (owner_id) where o.name like $1 || '%' order by 1`,
			[word],
		);
		expect(rows).toEqual([
			{
				name: `${word} North`,
				contact_name: "Ada Quill",
				owner: "Ada Quill",
				email: "ada@north.example",
				county_fips: "19103",
				language: "en",
				plantings: [
					["apple", "Haralson", 1250, 2.5, 2011],
					["plum", "", 40, null, null],
				],
			},
			{
				name: `${word} South`,
				contact_name: "Bo Wren",
				owner: "Bo Wren",
				email: null,
				county_fips: "19169",
				language: "en",
				plantings: null,
			},
		]);
		expect(await count(owner, "log.event where action = 'import.finished' and subject_id = $1", [importId])).toBe(1);
	});

	test("is understood with Spanish headings, semicolons, Latin-1 and hectares", async () => {
		const word = newWord();
		const text =
			`Finca;Dueño;Condado;Idioma;Cultivo;Árboles en producción;Superficie\r\n` +
			`${word} Peña;José Núñez;Johnson;español;Manzanas;1.250.000;1,5\r\n`;
		const importId = await readIn(Buffer.from(text, "latin1"));
		await check(importId, iowa, { written: "es", areaUnit: "ha" });
		await step(importId, "importing");
		const { rows } = await owner.query(
			`select o.name, w.name as owner, o.language, bearing_trees, round(area_acres::numeric, 3) as acres
			from directory.operation o join directory.owner w using (owner_id) join directory.planting using (operation_id)
			where o.name like $1 || '%'`,
			[word],
		);
		expect(rows).toEqual([
			{ name: `${word} Peña`, owner: "José Núñez", language: "es", bearing_trees: 1_250_000, acres: 3.707 },
		]);
	});

	test("in a spreadsheet has a heading above, merged cells, formulas and two hundred columns", async () => {
		const word = newWord();
		const book = new ExcelJS.Workbook();
		const sheet = book.addWorksheet("List");
		sheet.addRow(["Growers of the east"]);
		sheet.mergeCells("A1:D1");
		sheet.addRow(["Farm", "County", "E-mail", "Trees", ...Array.from({ length: 196 }, (_, i) => `Extra ${i}`)]);
		sheet.addRow([`${word} Plain`, "Johnson", "plain@east.example", 12]);
		sheet.addRow([`${word} Formula`, "Johnson", { formula: 'HYPERLINK("http://x.example")', result: "x" }, 12]);
		sheet.addRow([`${word} Merged`, "Johnson", "", 12]);
		sheet.addRow(["", "Johnson", "", 12]);
		sheet.mergeCells("A5:A6");
		sheet.addRow([
			`${word} Linked`,
			"Johnson",
			{ text: "linked@east.example", hyperlink: "mailto:linked@east.example" },
		]);
		const file = Buffer.from(await book.xlsx.writeBuffer());
		expect(await problemsOf(file)).toEqual([
			[4, "email cell_formula"],
			[5, "name cell_merged"],
			[6, "name cell_merged"],
		]);
		const importId = await readIn(file);
		expect((await find(importId))!.header).toHaveLength(200);
		await check(importId);
		expect(await step(importId, "importing")).toMatchObject({ status: "imported" });
		const { rows } = await owner.query(
			"select name, email from directory.operation where name like $1 || '%' order by 1",
			[word],
		);
		expect(rows).toEqual([
			{ name: `${word} Linked`, email: "linked@east.example" },
			{ name: `${word} Plain`, email: "plain@east.example" },
		]);
	});

	test("tells each row what is to be mended, and the nearest name where one is misspelt", async () => {
		const word = newWord();
		const head = "Farm,County,State,E-mail,Language,Crop,Trees,Year planted\n";
		const bad = await problemsOf(
			head +
				`${word} a,Jonhson,IA,,,,,\n` +
				`${word} b,Dane,WI,,,,,\n` +
				`${word} c,Dane,,,,,,\n` +
				`${word} d,Johnson,Ohio,,,,,\n` +
				`${word} e,Johnson,,not an address,,,,\n` +
				`${word} f,Johnson,,one@mail.example,,,,\n` +
				`${word} g,Johnson,,ONE@mail.example,,,,\n` +
				`${word} h,Johnson,,,German,,,\n` +
				`${word} i,Johnson,,,,Aple,12,\n` +
				`${word} j,Johnson,,,,Kumquat,12,\n` +
				`${word} k,Johnson,,,,Apple,1.250,\n` +
				`${word} l,Johnson,,,,Apple,12.5,\n` +
				`${word} m,Johnson,,,,Apple,12,11\n` +
				`,Johnson,,,,,,\n` +
				`${word} n,,,,,,,\n` +
				`"=HYPERLINK(""http://x.example"")",Johnson,,,,,,\n` +
				`${word} f,Johnson,,,,,,\n` +
				`${"x".repeat(201)},Johnson,,,,,,\n`,
		);
		expect(bad).toEqual([
			[2, "county county_near"],
			[3, "state state_not_granted"],
			[4, "county state_not_granted"],
			[5, "state state_unknown"],
			[6, "email email_wrong"],
			[8, "email email_twice"],
			[9, "language language_unknown"],
			[10, "crop crop_near"],
			[11, "crop crop_unknown"],
			[12, "bearingTrees ambiguous_number"],
			[13, "bearingTrees not_whole"],
			[14, "plantedYear season_wrong"],
			[15, "name empty"],
			[16, "county empty"],
			[17, "name cell_formula"],
			[18, "name row_twice"],
			[19, "name too_long_limit"],
		]);
	});

	test("of rows to mend comes back mended, also from a file that guards against formulas", async () => {
		const word = newWord();
		const importId = await readIn(`Farm,County\n${word} good,Johnson\n${word} bad,Jonhson\n`);
		await check(importId);
		await step(importId, "importing");
		const [bad] = await asDesk(iowa, (trx) => listBadRows(trx, importId));
		expect(bad!.cells).toEqual([`${word} bad`, "Jonhson"]);
		const again = await readIn(toCsv(["Farm", "County", "To fix"], [[`=${word} bad`, "Johnson", "County: …"]]));
		expect((await check(again)).counts).toMatchObject({ bad: 0, operations: 1 });
		await step(again, "importing");
		expect(await count(owner, "directory.operation where name = $1", [`=${word} bad`])).toBe(1);
	});

	test.each([
		["nothing", "", "file_empty"],
		["a header alone", "Farm,County\n", "file_empty"],
		["a picture", Buffer.from([0x89, 0x50, 0x4e, 0x47, 0, 0, 0, 13]), "file_not_known"],
		["a document under a list's name", "%PDF-1.7\n1 0 obj<<>>endobj\n", "file_not_known"],
		["half a spreadsheet", Buffer.concat([Buffer.from([0x50, 0x4b, 3, 4]), Buffer.alloc(400, 7)]), "file_broken"],
		["too many rows", `Farm,County\n${"a,b\n".repeat(20_001)}`, "too_many_rows"],
		["too many columns", `Farm,County\n${"a,".repeat(301)}\n`, "too_many_columns"],
	])("that is %s is refused in words, and nothing is kept of it", async (_, file, why) => {
		const importId = await readIn(file as string | Buffer);
		expect(await find(importId)).toMatchObject({ status: "reading", failure: { why } });
		expect(await count(owner, "directory.import_row where import_id = $1", [importId])).toBe(0);
		expect(await asDesk(iowa, (trx) => dropImport(trx, iowa, importId))).toBe("dropped");
		expect(await count(owner, "directory.import where import_id = $1", [importId])).toBe(0);
	});
});

async function listed(word: string) {
	const email = `${word.toLowerCase()}@list.example`;
	const operationId = await addOperation(owner, {
		state: "19",
		name: `${word} Old name`,
		email,
		contact: "Old contact",
	});
	return { email, operationId };
}
const contact = async (operationId: string) =>
	(
		await owner.query(
			`select o.name, o.contact_name, o.phone, json_agg(json_build_array(crop_key, bearing_trees) order by crop_key) as trees
			from directory.operation o join directory.planting using (operation_id) where operation_id = $1 group by 1, 2, 3`,
			[operationId],
		)
	).rows[0];

describe("growers who are in the list already", () => {
	test("are found by address or by name and county, and changed to what the file says and no more", async () => {
		const word = newWord();
		const { email, operationId } = await listed(word);
		const importId = await readIn(
			`Farm,County,E-mail,Contact,Phone,Crop,Trees\n${word} New name,Johnson,${email.toUpperCase()},,555 0101,Apple,90\n` +
				`${word} New name,Johnson,,,,Plum,8\n`,
		);
		expect((await check(importId)).counts).toMatchObject({ operations: 1, matched: 1, bad: 0 });
		await step(importId, "importing");
		expect(await contact(operationId)).toEqual({
			name: `${word} New name`,
			contact_name: "Old contact",
			phone: "555 0101",
			trees: [
				["apple", 90],
				["plum", 8],
			],
		});
		expect(await named(word)).toBe(1);
	});

	test("stay as they are, or get another beside them, as is chosen", async () => {
		const word = newWord();
		const { email, operationId } = await listed(word);
		const before = await contact(operationId);
		const file = `Farm,County,E-mail\n${word} New name,Johnson,${email}\n`;
		const skipped = await readIn(file);
		await check(skipped);
		await asDesk(iowa, (trx) => chooseForMatches(trx, skipped, "skip"));
		await step(skipped, "importing");
		expect(await contact(operationId)).toEqual(before);
		expect(await named(word)).toBe(1);

		const added = await readIn(file);
		await check(added);
		await asDesk(iowa, (trx) => chooseForMatches(trx, added, [{ number: 2, choice: "create" }]));
		await step(added, "importing");
		expect(await contact(operationId)).toEqual(before);
		expect(await named(word)).toBe(2);
		const again = await readIn(file);
		expect((await check(again)).counts).toMatchObject({ bad: 0, matched: 1 });
	});

	test("come back unchanged from the file of growers", async () => {
		const word = newWord();
		const { operationId } = await listed(word);
		const before = await contact(operationId);
		const file = await asDesk(iowa, async (trx) =>
			toCsv(fileHeader, await listFileRows(trx, await listByIds(trx, iowa, [operationId]))),
		);
		const importId = await readIn(file);
		expect((await check(importId)).counts).toMatchObject({ rows: 1, bad: 0, matched: 1, plantings: 1 });
		await step(importId, "importing");
		expect(await contact(operationId)).toEqual(before);
	});
});

describe("an import", () => {
	test("is all or nothing: one grower gone since stops it, and the list is as it was", async () => {
		const word = newWord();
		const operationId = await addOperation(owner, { state: "19", name: `${word} there` });
		const importId = await readIn(`Farm,County\n${word} there,Johnson\n${word} new,Johnson\n`);
		await check(importId);
		await owner.query("update directory.operation set status = 'left' where operation_id = $1", [operationId]);
		const before = await directory();
		expect(await step(importId, "importing")).toMatchObject({ status: "checked", failure: { why: "list_changed" } });
		expect(await directory()).toEqual(before);
	});

	test("stops when a state is no longer granted", async () => {
		const word = newWord();
		const viewer = await addAssociate("For a while", ["19"]);
		const importId = await readIn(`Farm,County\n${word},Johnson\n`, viewer);
		await check(importId, viewer);
		await owner.query("update auth.role_grant set revoked_at = now() where person_id = $1", [viewer.personId]);
		expect(await step(importId, "importing", viewer)).toMatchObject({ failure: { why: "states_changed" } });
		expect(await named(word)).toBe(0);
	});

	test("is done once, however often its job runs", async () => {
		const word = newWord();
		const importId = await readIn(`Farm,County\n${word},Johnson\n`);
		await check(importId);
		await asDesk(iowa, (trx) => beginStep(trx, iowa, importId, "importing"));
		expect(await asDesk(iowa, (trx) => beginStep(trx, iowa, importId, "importing"))).toBe("under_way");
		await Promise.all([1, 2, 3].map(() => importGrowers({ importId, step: "write" }, true)));
		expect(await named(word)).toBe(1);
		expect(await asDesk(iowa, (trx) => dropImport(trx, iowa, importId))).toBe("not_found");
	});

	test("is not found by who holds other states, though it is there", async () => {
		const both = await addAssociate("Associate of both", ["19", "55"]);
		const importId = await readIn("Farm,County\nSomebody,Dane\n", both);
		expect(await find(importId)).toBeUndefined();
		expect(await asDesk(iowa, (trx) => beginStep(trx, iowa, importId, "checking"))).toBe("not_found");
		expect((await asDesk(iowa, (trx) => listImports(trx, iowa))).map((row) => row.importId)).not.toContain(importId);
		expect(await asDesk(iowa, (trx) => listImportRows(trx, importId, "new", 1))).toMatchObject({ total: 0 });
		expect(await count(owner, "directory.import_row where import_id = $1", [importId])).toBe(1);
		expect(await find(importId, both)).toMatchObject({ status: "columns" });
	});
});

describe("undoing an import", () => {
	test("puts the list back exactly, growers it added and growers it changed", async () => {
		const word = newWord();
		await addOperation(owner, { state: "19", name: `${word} there`, email: `${word}@there.example` });
		const before = await directory();
		const importId = await readIn(
			`Farm,County,E-mail,Phone,Crop,Trees\n${word} there,Story,${word}@there.example,555,Apple,99\n` +
				`${word} there,Story,,,Plum,3\n${word} new,Johnson,,,Apple,5\n`,
		);
		await check(importId);
		await step(importId, "importing");
		expect(await directory()).not.toEqual(before);
		expect(await step(importId, "undoing")).toMatchObject({ status: "undone", failure: null });
		expect(await directory()).toEqual(before);
		expect(await count(owner, "log.event where action = 'import.undone' and subject_id = $1", [importId])).toBe(1);
	});

	const dependents: [string, (operationId: string) => Promise<unknown>][] = [
		[
			"changed since",
			(id) =>
				owner.query("update directory.operation set phone = '1', updated_at = now() where operation_id = $1", [id]),
		],
		[
			"given another planting",
			(id) => owner.query("insert into directory.planting (operation_id, crop_key) values ($1, 'plum')", [id]),
		],
		[
			"spoken to",
			(id) =>
				owner.query(
					"insert into collect.contact (operation_id, person_id, way, outcome) values ($1, $2, 'telephone', 'reached')",
					[id, iowa.personId],
				),
		],
		[
			"signed in for",
			(id) =>
				owner.query("insert into auth.role_grant (person_id, role, operation_id) values ($1, 'grower', $2)", [
					iowa.personId,
					id,
				]),
		],
	];
	test.each(dependents)("is refused when a grower was %s, and leaves all as it is", async (_, happen) => {
		const word = newWord();
		const importId = await readIn(`Farm,County\n${word} one,Johnson\n${word} two,Johnson\n`);
		await check(importId);
		await step(importId, "importing");
		const { rows } = await owner.query("select operation_id from directory.operation where name = $1", [`${word} two`]);
		await happen(rows[0].operation_id);
		const before = await directory();
		expect(await step(importId, "undoing")).toMatchObject({
			status: "imported",
			failure: { why: "rests_on_it", names: [`${word} two`], count: 1 },
		});
		expect(await directory()).toEqual(before);
	});
});
