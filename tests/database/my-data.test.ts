import { parse } from "csv-parse/sync";
import type { Client } from "pg";
import { RouterContextProvider } from "react-router";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Person } from "#app/auth/viewer.ts";
import { type Visitor, visitorContext } from "#app/auth/visitor.server.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { loader } from "#app/routes/grower/my-data.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { asGrower, askGrower, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addOperation, addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let person: Person;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	person = { personId: iowa.personId, displayName: "Rosa Quill", email: "rosa@quail.example", language: "es" };
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** Asks for a file as the route is asked, behind the guard of a signed-in visitor, a personal link, or nobody. */
async function taken(file: string, visitor: Partial<Visitor> & { operationIds?: string[] }) {
	const context = new RouterContextProvider();
	const { operationIds = [], ...more } = visitor;
	context.set(visitorContext, {
		person: null,
		link: null,
		grants: { coordinator: false, researcher: false, stateFips: [], operationIds },
		...more,
	});
	const request = new Request(`https://survey.example/orchard/${file}`);
	return loader({ context, params: { file }, request } as unknown as Parameters<typeof loader>[0]);
}

/** An operation whose name a spreadsheet would run, which has answered with a comment, and withdrawn. */
async function withdrawnGrower() {
	const asked = await askGrower(owner, iowa, { name: "=HYPERLINK(1)", contact: "Ada Quill" });
	const { place, grower, step, plantingIds } = asked;
	await typeStep(grower, place, step, pounds(40, 4000, 1000));
	await typeStep(grower, place, "next_year", { comment: "Hail on May 4" });
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	expect(await asGrower(grower, (trx) => withdrawAnswer(trx, grower, place))).toBe("withdrawn");
	await owner.query("insert into directory.operation_pin values ($1, -91.5, 41.6)", [place.operationId]);
	return { ...place, plantingId: plantingIds[0]! };
}

test("the JSON file holds all that is kept: directory, pin, plantings, surveys, submissions, mails, consents", async () => {
	const { operationId, plantingId, surveyId } = await withdrawnGrower();
	const response = await taken("my-data.json", { person, operationIds: [operationId] });
	expect(Object.fromEntries(response.headers)).toMatchObject({
		"content-type": "application/json; charset=utf-8",
		"content-disposition": 'attachment; filename="tallygrove-my-data.json"',
		"cache-control": "private, no-store",
	});
	const { account, operations } = await response.json();
	expect(account).toEqual({ display_name: "Rosa Quill", email: "rosa@quail.example", language: "es" });
	expect(operations).toHaveLength(1);
	expect(operations[0]).toMatchObject({
		operation_id: operationId,
		name: "=HYPERLINK(1)",
		contact_name: "Ada Quill",
		county: "Johnson",
		state: "Iowa",
		pin: { longitude: -91.5, latitude: 41.6 },
		plantings: [{ planting_id: plantingId, crop_key: "apple", bearing_trees: 40 }],
	});
	const survey = operations[0].surveys.find((asked: { survey_id: string }) => asked.survey_id === surveyId);
	expect(survey).toMatchObject({
		season: 2031,
		disposition: "refused",
		pledge_version: "2026-1",
		mails: [{ kind: "receipt", wave: 1 }],
		submissions: [{ version: 1, withdrawn_at: expect.any(String) }],
	});
	expect(survey.submissions[0].answers).toContainEqual(
		expect.objectContaining({ questionKey: "harvested", plantingId, value: 1000 }),
	);
	expect(JSON.stringify(survey.answers_now)).toContain("Hail on May 4");
});

test("the CSV file tells the same by lines, and no text in it runs as a formula", async () => {
	const { operationId, plantingId, surveyId } = await withdrawnGrower();
	const response = await taken("my-data.csv", { person, operationIds: [operationId] });
	expect(response.headers.get("content-disposition")).toBe('attachment; filename="tallygrove-my-data.csv"');
	const text = await response.text();
	expect(text.split("\r\n")[0]).toBe("operation,part,about,name,value,typed,at");
	const lines: Record<string, string>[] = parse(text, { columns: true });
	expect(lines).toContainEqual(
		expect.objectContaining({ operation: operationId, part: "operation", name: "name", value: "'=HYPERLINK(1)" }),
	);
	expect(lines).toContainEqual(expect.objectContaining({ part: "pin", name: "longitude", value: "-91.5" }));
	expect(lines).toContainEqual(
		expect.objectContaining({
			part: "submission 1",
			about: `${surveyId} ${plantingId}`,
			name: "harvested",
			value: "1000",
			typed: "1000 lb",
		}),
	);
	expect(lines).toContainEqual(
		expect.objectContaining({ part: "submission 1", name: "comment", value: "Hail on May 4" }),
	);
	expect(lines.filter(({ part, name }) => part === "mail" && name === "receipt 1")).toHaveLength(1);
	expect(lines.some(({ part, name }) => part === "submission 1" && name === "withdrawn_at")).toBe(true);
});

const refusedWith = (status: number) => expect.objectContaining({ init: expect.objectContaining({ status }) });

test.each(["my-data.json", "my-data.csv"])("%s holds nothing of another grower, though it is there", async (file) => {
	const { operationId: theirs } = await withdrawnGrower();
	const mine = await addOperation(owner, { state: "19", name: "Larch Creek Orchard" });
	expect(await count(owner, "collect.response where operation_id = $1", [theirs])).toBe(1);
	const text = await (await taken(file, { person, operationIds: [mine] })).text();
	expect(text).toContain("Larch Creek Orchard");
	for (const foreign of [theirs, "HYPERLINK", "Hail on May 4", "-91.5"]) expect(text).not.toContain(foreign);
});

test("neither a personal link nor a person without an operation nor a stranger takes a file, and no other is there", async () => {
	const { operationId, surveyId } = await withdrawnGrower();
	const link = { personalLinkId: crypto.randomUUID(), surveyId, operationId };
	await expect(taken("my-data.json", { link })).rejects.toEqual(refusedWith(401));
	await expect(taken("my-data.json", {})).rejects.toEqual(refusedWith(401));
	await expect(taken("my-data.json", { person })).rejects.toEqual(refusedWith(403));
	await expect(taken("toString", { person, operationIds: [operationId] })).rejects.toEqual(refusedWith(404));
});
