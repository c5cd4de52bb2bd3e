import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listLogChoices } from "#app/auth/event-filter.server.ts";
import { listAllEvents, listEvents } from "#app/auth/event-list.server.ts";
import { logEvent, type NewEvent } from "#app/auth/event-log.server.ts";
import { LogQuery } from "#app/auth/log-query.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { discardDraft } from "#app/collect/survey-mending.server.ts";
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

const addSignIns = (many: number, at: string) =>
	owner.query(
		`insert into log.event (person_id, action, subject_kind, subject_id, happened_at)
		select $1, 'auth.signed_in', 'person', $2, $4 from generate_series(1, $3)`,
		[iowa.personId, iowa.personId, many, at],
	);
const addChangeAt = async (happenedAt: string) => {
	await owner.query(
		`insert into log.event (person_id, action, subject_kind, subject_id, happened_at)
		values ($1, 'settings.changed', 'settings', $2, $2::text::timestamptz)`,
		[coordinator.personId, happenedAt],
	);
};
const momentsSeen = async (query: Record<string, unknown>) =>
	(await list({ show: "settings", ...query })).rows.map(({ happenedAt }) => happenedAt.toISOString());

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

test("it names a draft that was thrown away", async () => {
	const draft = draftOf(["19"], { titleEn: "Frost", titleEs: "Helada" });
	const { surveyId } = (await asDesk(iowa, (trx) => createSurvey(trx, iowa, draft))) as { surveyId: string };
	await asDesk(iowa, (trx) => discardDraft(trx, iowa, surveyId));
	const [discarded, created] = (await list({ show: "survey" })).rows;
	expect([discarded?.action, created?.action]).toEqual(["survey.discarded", "survey.created"]);
	const told = { season: 2031, title: { en: "Frost", es: "Helada" } };
	expect([discarded?.survey, created?.survey]).toEqual([told, told]);
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

test("pages hold every event once, also those of one moment, whatever is logged while somebody turns them", async () => {
	await addSignIns(120, "2026-05-04");
	const first = await list({ show: "auth" });
	await addSignIns(7, "2026-05-05");
	const second = await list({ show: "auth", after: first.after });
	const third = await list({ show: "auth", after: second.after });
	const pages = [first, second, third];
	expect(pages.map(({ rows }) => rows.length)).toEqual([50, 50, 20]);
	const ids = pages.flatMap(({ rows }) => rows.map(({ eventId }) => eventId));
	expect(new Set(ids).size).toBe(120);
	expect(third).toMatchObject({ after: null, total: 127, moreThanTotal: false });

	const back = await list({ show: "auth", before: third.before });
	expect(back.rows.map(({ eventId }) => eventId)).toEqual(second.rows.map(({ eventId }) => eventId));
	// Going back, too, nothing is seen twice: what was logged meanwhile is a page of its own.
	const begun = await list({ show: "auth", before: back.before });
	const top = await list({ show: "auth", before: begun.before });
	expect([begun.rows.length, top.rows.length, top.before]).toEqual([50, 7, null]);
	const all = [...top.rows, ...begun.rows, ...back.rows, ...third.rows].map(({ eventId }) => eventId);
	expect(new Set(all).size).toBe(127);
	expect((await list({ show: "auth", after: "x" })).rows).toHaveLength(50);
});

test("days are those of the network's clock, and the last one counts whole", async () => {
	// Midnight in Chicago is five o'clock in Greenwich in July.
	for (const moment of ["2025-07-02T04:59:59Z", "2025-07-02T05:00:00Z", "2025-07-03T04:59:59Z", "2025-07-03T05:00:00Z"])
		await addChangeAt(moment);
	expect(await momentsSeen({ from: "2025-07-02", to: "2025-07-02" })).toEqual([
		"2025-07-03T04:59:59.000Z",
		"2025-07-02T05:00:00.000Z",
	]);
	expect(await momentsSeen({ to: "2025-07-01" })).toEqual(["2025-07-02T04:59:59.000Z"]);
	expect(await momentsSeen({ from: "2025-07-03" })).toEqual(["2025-07-03T05:00:00.000Z"]);
	expect(await momentsSeen({ from: "soon", to: "2025-02-31" })).toHaveLength(4);
});

test("who, kind and survey narrow it: of a survey are its answers, drafts, releases and reports too", async () => {
	const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"], { season: 2032 })));
	const { surveyId } = made as { surveyId: string };
	const { rows: drafts } = await owner.query(
		`insert into collect.release_draft (survey_id, status, rules, drafted_by) values ($1, 'queued', '{}', $2)
		returning release_draft_id`,
		[surveyId, iowa.personId],
	);
	const noteOf = (action: NewEvent["action"], subjectKind: string, subjectId: string, detail = {}) =>
		note({ personId: iowa.personId, action, subjectKind, subjectId, detail });
	await noteOf("release.drafted", "release_draft", drafts[0].release_draft_id);
	await noteOf("response.taken_in", "response", crypto.randomUUID(), { surveyId });
	await noteOf("finding.confirmed", "edit_finding", crypto.randomUUID(), { surveyId });
	await noteOf("response.taken_in", "response", crypto.randomUUID(), { surveyId: crypto.randomUUID() });
	await note({
		personId: null,
		action: "response.started",
		subjectKind: "response",
		subjectId: "1",
		detail: { surveyId },
	});
	const ofIt = await list({ survey: surveyId });
	expect(ofIt.rows.map(({ action }) => action)).toEqual([
		"response.started",
		"finding.confirmed",
		"response.taken_in",
		"release.drafted",
		"survey.created",
	]);
	expect(ofIt.rows.every(({ survey }) => survey?.season === 2032)).toBe(true);
	expect(await actions({ survey: surveyId, who: iowa.personId, show: "response" })).toEqual(["response.taken_in"]);
	expect(await actions({ survey: surveyId, who: "link" })).toEqual(["response.started"]);
	expect(await actions({ survey: surveyId, show: "release.drafted" })).toEqual(["release.drafted"]);
	expect(await actions({ survey: surveyId, who: coordinator.personId })).toEqual([]);

	const all = await scopedTransaction({ kind: "desk", stateFips: [] }, (trx) =>
		listAllEvents(trx, coordinator, LogQuery.parse({ survey: surveyId }), 5),
	);
	expect(all).toHaveLength(5);
	const tooMany = await scopedTransaction({ kind: "desk", stateFips: [] }, (trx) =>
		listAllEvents(trx, coordinator, LogQuery.parse({ survey: surveyId }), 4),
	);
	expect(tooMany).toBeUndefined();
});

test("a form is told by its newest title, and growers are not among those the log is narrowed to", async () => {
	const { rows } = await owner.query("select form_id from collect.form limit 1");
	await note({
		personId: iowa.personId,
		action: "form.published",
		subjectKind: "form",
		subjectId: rows[0].form_id,
		detail: { version: 3 },
	});
	expect((await list({ show: "form" })).rows[0]).toMatchObject({
		form: { en: expect.any(String) as string, es: expect.any(String) as string },
		told: { version: 3 },
	});
	await owner.query("insert into auth.role_grant (person_id, role, state_fips) values ($1, 'associate', '19')", [
		iowa.personId,
	]);
	const grower = await addPerson(owner, "Wilma Teagarden", []);
	const choices = await scopedTransaction({ kind: "desk", stateFips: [] }, (trx) => listLogChoices(trx, coordinator));
	const ids = choices.people.map(({ personId }) => personId);
	expect(ids).toContain(iowa.personId);
	expect(ids).not.toContain(grower.personId);
	expect(choices.surveys.map(({ season }) => season)).toEqual([2032, 2031]);
});
