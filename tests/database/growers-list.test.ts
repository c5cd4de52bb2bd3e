import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { answeredCondition, listLastAnswers } from "#app/collect/last-answers.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { OperationQuery, queryParts } from "#app/directory/operation.schema.ts";
import { listByIds, listMatchingIds, listOperations } from "#app/directory/operation-list.server.ts";
import { dropView, listSavedViews, renameView, saveView } from "#app/directory/saved-views.server.ts";
import { fileHeader, listFileRows } from "#app/directory/grower-file.server.ts";
import { toCsv } from "#app/publish/data-file.ts";
import { actOnGrowers } from "#app/routes/desk/parts/growers/bulk-steps.server.ts";
import { listChosen, readChoice } from "#app/routes/desk/parts/growers/chosen.server.ts";
import { addOperation, addPerson, answerFor, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, both } = await openSurveysDatabase();

const list = (viewer: Associate, parts: Record<string, unknown>) => {
	const query = OperationQuery.parse(parts);
	return asDesk(viewer, (trx) => listOperations(trx, viewer, query, answeredCondition(query.answered)));
};
const names = async (viewer: Associate, parts: Record<string, unknown>) =>
	(await list(viewer, parts)).rows.map(({ name }) => name);

describe("the list", () => {
	test("is narrowed by state, district, crop and mail, each to exactly these", async () => {
		const word = "Narrow";
		const add = (name: string, more: object = {}) =>
			addOperation(owner, { state: "19", name: `${word} ${name}`, ...more });
		await add("A");
		await add("B plum", { crop: "plum" });
		await add("C no mail", { email: null });
		const returned = await add("D returned");
		const stopped = await add("E stopped");
		await add("F Dane", { state: "55" });
		await add("G taken out", { crop: "plum", removedOn: "2030-01-01" });
		await owner.query("update directory.operation set mail_returned_at = now() where operation_id = $1", [returned]);
		await owner.query("update directory.operation set mail_wanted = false where operation_id = $1", [stopped]);
		const letters = async (viewer: Associate, parts: Record<string, unknown>) =>
			(await names(viewer, { q: word, ...parts })).map((name) => name.split(" ")[1]).join("");
		expect(await letters(both, {})).toBe("ABCDEFG");
		expect(await letters(iowa, {})).toBe("ABCDEG");
		expect(await letters(iowa, { state: "55" })).toBe("");
		expect(await letters(both, { state: "55" })).toBe("F");
		expect(await letters(both, { district: "IA-9" })).toBe("ABCDEG");
		expect(await letters(both, { district: "IA-1" })).toBe("");
		expect(await letters(both, { crop: "plum" })).toBe("B");
		expect(await letters(both, { mail: "none" })).toBe("C");
		expect(await letters(both, { mail: "returned" })).toBe("D");
		expect(await letters(both, { mail: "stopped" })).toBe("E");
		expect(await letters(both, { mail: "reachable" })).toBe("ABFG");
		expect(await letters(both, { mail: "1; drop table" })).toBe("ABCDEFG");
	});

	test("finds a name however its accents were typed, and takes signs for themselves", async () => {
		await addOperation(owner, { state: "19", name: "Cañón Peña (2)" });
		for (const q of ["canon pena", "CAÑÓN", "peñá (2)"]) expect(await names(iowa, { q })).toEqual(["Cañón Peña (2)"]);
		for (const q of ["pena.*", "pe%a", "cañón_", "\\"]) expect(await names(iowa, { q })).toEqual([]);
	});

	test("is narrowed by the season of the last answer", async () => {
		const crop = "pawpaw";
		const word = "Seasonal";
		const add = (name: string) => addOperation(owner, { state: "19", name: `${word} ${name}`, crop });
		const [now, before, long] = [await add("now"), await add("before"), await add("long ago")];
		await add("never");
		for (const [season, operation] of [
			[2033, now],
			[2032, before],
			[2030, long],
		] as const) {
			const draft = draftOf(["19"], { crops: [crop], season });
			const { surveyId } = (await asDesk(iowa, (trx) => createSurvey(trx, iowa, draft))) as { surveyId: string };
			await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId));
			await answerFor(owner, surveyId, operation);
		}
		const told = async (answered: string) =>
			(await names(iowa, { q: word, answered })).map((name) => name.slice(word.length + 1)).join();
		expect(await told("any")).toBe("before,long ago,never,now");
		expect(await told("this")).toBe("now");
		expect(await told("last")).toBe("before");
		expect(await told("not_this")).toBe("before,long ago,never");
		expect(await told("not_two")).toBe("long ago,never");
		expect(await told("never")).toBe("never");
		const last = await asDesk(iowa, (trx) => listLastAnswers(trx, [now, long]));
		expect(last.size).toBe(2);
	});

	test("chooses thousands at once without losing or doubling anyone", async () => {
		await owner.query(
			`with o as (insert into directory.owner (name) select 'Many' from generate_series(1, 3000) returning owner_id),
			p as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name)
				select owner_id, 'Many of a name', '19103', '19', 'Nobody' from o returning operation_id)
			insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, 'hazelnut', 7 from p`,
		);
		const { rows, ...counted } = await list(iowa, { crop: "hazelnut", sort: "trees", direction: "desc" });
		expect([rows.length, rows[0]?.bearingTrees]).toEqual([50, 7]);
		expect(counted).toMatchObject({ total: 1000, moreThanTotal: true });
		const query = OperationQuery.parse({ crop: "hazelnut" });
		expect(new Set(await asDesk(iowa, (trx) => listMatchingIds(trx, iowa, query))).size).toBe(3000);
	});
});

const keep = (viewer: Associate, name: string, parts: Record<string, string>) =>
	asDesk(viewer, (trx) => saveView(trx, viewer, { name, query: OperationQuery.parse(parts) }));
const views = (viewer: Associate) => asDesk(viewer, (trx) => listSavedViews(trx, viewer));

describe("a saved view", () => {
	test("keeps what differs from the plain list, and not the page", async () => {
		const viewer = await addPerson(owner, "Keeper", ["19"]);
		await keep(viewer, "Plums", { crop: "plum", mail: "none", sort: "name", direction: "desc", after: '["Plum",1]' });
		expect(await views(viewer)).toMatchObject([
			{ name: "Plums", parts: { crop: "plum", mail: "none", direction: "desc" } },
		]);
		await keep(viewer, "Plums", { q: "quail" });
		expect(await views(viewer)).toMatchObject([{ name: "Plums", parts: { q: "quail" } }]);
		expect(queryParts(OperationQuery.parse({}))).toEqual({});
	});

	test("takes another name, unless another view has it or it is somebody else's", async () => {
		const [one, other] = [await addPerson(owner, "Namer", ["19"]), await addPerson(owner, "Stranger", ["19"])];
		await keep(one, "Plums", { crop: "plum" });
		await keep(one, "Quail", { q: "quail" });
		const savedViewId = (await views(one)).find(({ name }) => name === "Plums")!.savedViewId;
		const rename = (viewer: Associate, name: string) =>
			asDesk(viewer, (trx) => renameView(trx, viewer, { savedViewId, name }));
		expect(await rename(one, "Quail")).toBe("name_taken");
		expect(await rename(other, "Mine now")).toBe("not_found");
		expect(await rename(one, "Plums")).toBe("renamed");
		expect(await rename(one, "Stone fruit")).toBe("renamed");
		expect((await views(one)).map(({ name, parts }) => [name, parts])).toEqual([
			["Quail", { q: "quail" }],
			["Stone fruit", { crop: "plum" }],
		]);
	});

	test("is its person's alone", async () => {
		const [one, other] = [await addPerson(owner, "One", ["19"]), await addPerson(owner, "Other", ["19"])];
		await keep(one, "Mine", { crop: "apple" });
		const [view] = await views(one);
		expect(await views(other)).toEqual([]);
		await asDesk(other, (trx) => dropView(trx, other, view!.savedViewId));
		expect(await count(owner, "directory.saved_view where saved_view_id = $1", [view!.savedViewId])).toBe(1);
		await asDesk(one, (trx) => dropView(trx, one, view!.savedViewId));
		expect(await count(owner, "directory.saved_view where saved_view_id = $1", [view!.savedViewId])).toBe(0);
	});

	test("is refused after the thirtieth, unless its name is there", async () => {
		const viewer = await addPerson(owner, "Collector", ["19"]);
		for (let i = 0; i < 30; i++) expect(await keep(viewer, `View ${i}`, {})).toBe("saved");
		expect(await keep(viewer, "One more", {})).toBe("too_many");
		expect(await keep(viewer, "View 3", { crop: "plum" })).toBe("saved");
		expect(await views(viewer)).toHaveLength(30);
	});
});

const choose = (viewer: Associate, search: string) =>
	asDesk(viewer, (trx) => listChosen(trx, viewer, readChoice(`https://survey.example/desk/growers/chosen?${search}`)));

describe("chosen growers", () => {
	test("are those ticked, on the page, or in the list, and of granted states only", async () => {
		const mine = await addOperation(owner, { state: "19", name: "Chosen one" });
		const other = await addOperation(owner, { state: "55", name: "Chosen beyond" });
		const ticked = await choose(iowa, `which=ticked&id=${mine}&id=${other}&id=${mine}`);
		expect(ticked.operationIds).toEqual([mine]);
		expect((await choose(both, `which=ticked&id=${mine}&id=${other}`)).operationIds).toEqual([mine, other]);
		expect((await choose(iowa, "which=matching&q=Chosen")).operationIds).toEqual([mine]);
		expect((await choose(iowa, "which=page&q=Chosen")).operationIds).toEqual([mine]);
		expect((await choose(iowa, "which=ticked&id=nonsense")).operationIds).toEqual([]);
		expect(await count(owner, "directory.operation where operation_id = $1", [other])).toBe(1);
	});

	test("change their language, and nobody else does", async () => {
		const ids = [
			await addOperation(owner, { state: "19" }),
			await addOperation(owner, { state: "19", language: "es" }),
			await addOperation(owner, { state: "55" }),
		];
		const step = { step: "language", mark: "", language: "es" } as const;
		const done = await asDesk(iowa, (trx) => actOnGrowers(trx, iowa, ids, step));
		expect(done).toEqual({ toast: { key: "growers:bulk.toast.language", values: { count: 1 } } });
		const { rows } = await owner.query(
			"select language from directory.operation where operation_id = any ($1) order by state_fips",
			[ids],
		);
		expect(rows.map(({ language }) => language)).toEqual(["es", "es", "en"]);
	});

	test("get mail anew where it came back, and an address that is empty does not", async () => {
		const ids = [
			await addOperation(owner, { state: "19" }),
			await addOperation(owner, { state: "19", email: null }),
			await addOperation(owner, { state: "19" }),
		];
		await owner.query("update directory.operation set mail_returned_at = now() where operation_id = any ($1)", [
			ids.slice(0, 2),
		]);
		const done = await asDesk(iowa, (trx) => actOnGrowers(trx, iowa, ids, { step: "try_anew", mark: "" }));
		expect(done).toMatchObject({ toast: { values: { count: 1 } } });
		expect(
			await count(owner, "directory.operation where operation_id = any ($1) and mail_returned_at is null", [ids]),
		).toBe(2);
	});

	test("alone are invited and reminded, once", async () => {
		const crop = "aronia";
		const ids = [];
		for (let i = 0; i < 4; i++) ids.push(await addOperation(owner, { state: "19", crop }));
		const draft = draftOf(["19"], { crops: [crop] });
		const { surveyId } = (await asDesk(iowa, (trx) => createSurvey(trx, iowa, draft))) as { surveyId: string };
		await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId));
		const act = (some: string[], step: object) =>
			asDesk(iowa, (trx) => actOnGrowers(trx, iowa, some, { mark: "", surveyId, ...step } as never));
		const mailed = (kind: string) =>
			count(owner, "collect.mailing where survey_id = $1 and kind = $2", [surveyId, kind]);
		expect(await act(ids.slice(0, 2), { step: "invite" })).toMatchObject({ toast: { values: { count: 2 } } });
		expect(await act(ids.slice(0, 2), { step: "invite" })).toMatchObject({ toast: { values: { count: 0 } } });
		expect(await mailed("invitation")).toBe(2);
		await owner.query("update collect.mailing set sent_at = now() where survey_id = $1", [surveyId]);
		expect(await act([ids[0]!, ids[3]!], { step: "remind", wave: 1 })).toMatchObject({
			toast: { values: { count: 1 } },
		});
		expect(await act([ids[0]!, ids[3]!], { step: "remind", wave: 1 })).toMatchObject({
			toast: { values: { count: 0 } },
		});
		expect(await mailed("reminder")).toBe(1);
		expect(await act(ids, { step: "invite", surveyId: crypto.randomUUID() })).toBe("not_found");
	});

	test("go into a file in which no cell is a formula", async () => {
		const id = await addOperation(owner, {
			state: "19",
			name: '=HYPERLINK("http://x.example","Win")',
			contact: "+1 Ada",
		});
		const file = await asDesk(iowa, async (trx) =>
			toCsv(fileHeader, await listFileRows(trx, await listByIds(trx, iowa, [id]))),
		);
		const [header, row] = file.split("\r\n");
		expect(header).toBe(fileHeader.join(","));
		expect(row).toBe(
			`"'=HYPERLINK(""http://x.example"",""Win"")","=HYPERLINK(""http://x.example"",""Win"")",'+1 Ada,ada@quailbend.example,,Johnson,IA,en,apple,,40,0,,`.replace(
				`,"=HYPER`,
				`,"'=HYPER`,
			),
		);
	});
});
