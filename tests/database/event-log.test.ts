import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listEvents } from "#app/auth/event-list.server.ts";
import { logEvent, type NewEvent } from "#app/auth/event-log.server.ts";
import { LogQuery } from "#app/auth/log-actions.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addPerson, asDesk, connectOwner, count, draftOf, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let coordinator: Coordinator;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Del 100% Fenwick", ["19"]);
	coordinator = { ...(await addPerson(owner, "Marit Osgood", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** As the coordinator's guard opens a transaction: a desk without a state. */
const list = (query: Record<string, unknown> = {}) =>
	scopedTransaction({ kind: "desk", stateFips: [] }, (trx) => listEvents(trx, coordinator, LogQuery.parse(query)));
const actions = async (query: Record<string, unknown>) => (await list(query)).rows.map(({ action }) => action);
const note = (event: NewEvent) => scopedTransaction({ kind: "none" }, (trx) => logEvent(trx, event));

test("the log tells who did what to whom, newest first", async () => {
	const { surveyId } = (await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"])))) as { surveyId: string };
	await note({
		personId: iowa.personId,
		action: "survey.invited",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: { queued: 12, wave: 1 },
	});
	await note({
		personId: coordinator.personId,
		action: "grant.given",
		subjectKind: "person",
		subjectId: iowa.personId,
		stateFips: "19",
		detail: { role: "associate" },
	});
	const { rows } = await list();
	expect(rows.map(({ action, person, about }) => [action, person?.name, about])).toEqual([
		["grant.given", "Marit Osgood", "Del 100% Fenwick"],
		["survey.invited", "Del 100% Fenwick", null],
		["survey.created", "Del 100% Fenwick", null],
	]);
	expect(rows[0]).toMatchObject({ stateFips: "19", told: { role: "associate" } });
	expect(rows[1]).toMatchObject({ survey: { season: 2031, title: { en: "After harvest" } }, told: { queued: 12 } });
});

test("a coordinator learns from it neither which grower answered nor any detail that is not meant to be told", async () => {
	const operationId = crypto.randomUUID();
	const responseId = crypto.randomUUID();
	await note({
		personId: null,
		action: "response.submitted",
		subjectKind: "response",
		subjectId: responseId,
		stateFips: "19",
		detail: { operationId, harvested: 4711, byLink: true, role: { not: "a role" } },
	});
	const [event] = (await list({ show: "response" })).rows;
	expect(event).toMatchObject({ action: "response.submitted", person: null, stateFips: "19", told: { byLink: true } });
	expect(JSON.stringify(event)).not.toMatch(new RegExp(`${operationId}|${responseId}|4711|not`));
	expect(await count(owner, "log.event where detail ->> 'operationId' = $1", [operationId])).toBe(1);
});

test("filter and search narrow it: by kind, by who did it, by whom it is about", async () => {
	const { rows } = await owner.query(
		`insert into auth.access_request (person_id, affiliation, purpose, agreement_version, agreed_at)
		values ($1, 'A', 'B', '1', now()) returning access_request_id`,
		[(await addPerson(owner, "Priya Halloran", [])).personId],
	);
	await note({
		personId: coordinator.personId,
		action: "access.approved",
		subjectKind: "access_request",
		subjectId: rows[0].access_request_id,
	});
	expect(await actions({ show: "access" })).toEqual(["access.approved"]);
	expect(await actions({ q: "PRIYA" })).toEqual(["access.approved"]);
	expect(await actions({ q: "marit" })).toEqual(["access.approved", "grant.given"]);
	expect(await actions({ q: "100% f", show: "grant" })).toEqual(["grant.given"]);
	expect(await actions({ q: "%", show: "grant" })).toEqual(["grant.given"]);
	expect(await actions({ q: "nobody of this name" })).toEqual([]);
	expect(await actions({ show: "' or true", q: "priya" })).toEqual(["access.approved"]);
});

test("pages hold every event once, also those of one moment", async () => {
	await owner.query(
		`insert into log.event (person_id, action, subject_kind, subject_id, happened_at)
		select $1, 'auth.signed_in', 'person', $2, '2026-05-04' from generate_series(1, 120)`,
		[iowa.personId, iowa.personId],
	);
	const pages = [];
	for (const page of [1, 2, 3]) pages.push(await list({ show: "auth", page }));
	expect(pages.map((page) => page.rows.length)).toEqual([50, 50, 20]);
	expect(new Set(pages.flatMap((page) => page.rows.map(({ eventId }) => eventId))).size).toBe(120);
	expect(await list({ show: "auth", page: 99 })).toMatchObject({ page: 3, pageCount: 3, total: 120 });
});
