import { Client } from "pg";
import { createSession, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, expect, test } from "vitest";
import { listEvents } from "#app/auth/event-list.server.ts";
import { listPeople } from "#app/auth/grants.server.ts";
import { LogQuery } from "#app/auth/log-query.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { sessionContext, type VisitorSession } from "#app/auth/session.server.ts";
import type { Associate, Coordinator, Grower } from "#app/auth/viewer.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { keepEntryDraft } from "#app/collect/entry-drafts.server.ts";
import { createPersonalLink, findLink } from "#app/collect/personal-link.server.ts";
import type { AnswerPlace } from "#app/collect/responses.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listOperations } from "#app/directory/operation-list.server.ts";
import { action } from "#app/routes/grower/leave.tsx";
import { leave } from "#app/routes/grower/parts/leaving.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addPlanting,
	addSurvey,
	asGrower,
	beginAnswering,
	growerOf,
	pounds,
	stepKeysOf,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
/** Sees every row of every schema, the queue's too. */
let everything: Client;
let iowa: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	const admin = new URL(process.env.TEST_DATABASE_ADMIN_URL!);
	admin.pathname = new URL(database.ownerUrl).pathname;
	everything = new Client({ connectionString: admin.href });
	await everything.connect();
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await Promise.all([owner.end(), everything.end()]);
	await database.drop();
});

/** Of one length, so that no name holds another. */
let made = 1000;

/** What a grower of one's own is known by, none of it to be found with anybody else. */
function newNames() {
	made += 1;
	return {
		operation: `Zephyrine ${made} Orchard`,
		contact: `Rosa Zephyr${made}`,
		email: `rosa${made}@zephyrine.example`,
		phone: `555 8${made}41`,
		account: `Rosalind Zephyr${made}`,
		subject: `zephyr-subject-${made}`,
		comment: `hail at gate ${made}`,
		unsent: `not sent ${made}`,
		typed: `on the line ${made}`,
		reason: `was in hospital ${made}`,
		cultivar: `Zephyr seedling ${made}`,
		longitude: `-91.53${made}7`,
	};
}
type Names = ReturnType<typeof newNames>;

/** A signed-in grower with everything that can be kept of one: a released survey, a closed one, and an open draft. */
async function grower() {
	const names = newNames();
	const operationId = await addOperation(owner, {
		state: "19",
		name: names.operation,
		contact: names.contact,
		email: names.email,
	});
	await owner.query("update directory.operation set phone = $2 where operation_id = $1", [operationId, names.phone]);
	await owner.query("update directory.planting set cultivar = $2 where operation_id = $1", [
		operationId,
		names.cultivar,
	]);
	await owner.query("insert into directory.operation_pin values ($1, $2, 41.6)", [operationId, names.longitude]);
	const { rows } = await owner.query(
		`insert into auth.person (issuer, subject, display_name, email) values ('https://id.example', $1, $2, $3) returning person_id`,
		[names.subject, names.account, names.email],
	);
	const personId = rows[0].person_id as string;
	await grant(personId, operationId);
	const person = { personId, displayName: names.account, email: names.email, language: null };
	const viewer: Grower = { ...growerOf(operationId), person };
	await keepListWork(operationId, names);
	const released = await answered(viewer, operationId, names.comment);
	await keepReview(released, names);
	await addRelease(released);
	const closed = await answered(viewer, operationId, names.comment);
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, closed.surveyId));
	const open = { surveyId: await addSurvey(iowa), operationId };
	await beginAnswering(viewer, open);
	await typeStep(viewer, open, "next_year", { comment: names.unsent });
	await keepDeskWork(open, closed, names);
	return { names, operationId, personId, viewer, released, closed, open };
}

/** What an associate's work on the list leaves of a grower: a file's row, a note of a call, a merge, a view by name. */
async function keepListWork(operationId: string, names: Names): Promise<void> {
	const told = JSON.stringify([names.operation, names.contact, names.email, names.phone]);
	await owner.query(
		`with i as (insert into directory.import (person_id, state_fips, file_name) values ($1, '{19}', 'list.csv') returning import_id)
		insert into directory.import_row (import_id, row_number, cells, entry, restore, operation_id)
		select import_id, 2, $3::jsonb, $3::jsonb, $3::jsonb, $2 from i`,
		[iowa.personId, operationId, told],
	);
	await owner.query(
		`insert into collect.contact (operation_id, person_id, way, outcome, note) values ($1, $2, 'telephone', 'reached', $3)`,
		[operationId, iowa.personId, names.contact],
	);
	const other = await addOperation(owner, { state: "19", name: "Kept apart" });
	await owner.query(
		"insert into directory.merge (operation_id, dropped_id, merged_by, restore) values ($1, $2, $3, $4::jsonb)",
		[operationId, other, iowa.personId, told],
	);
	await owner.query("insert into directory.saved_view (person_id, name, query) values ($1, $2, $3)", [
		iowa.personId,
		`View ${made}`,
		JSON.stringify({ q: names.contact }),
	]);
}

/** What an associate was typing for the grower, and why a late answer was taken in or left. */
async function keepDeskWork(open: AnswerPlace, closed: AnswerPlace, names: Names): Promise<void> {
	await asDesk(iowa, (trx) =>
		keepEntryDraft(trx, iowa, open, { mode: "telephone", typed: { "next_year.comment": names.typed } }),
	);
	await owner.query(
		`insert into collect.late_decision (response_id, version, taken, reason, decided_by)
		select response_id, 1, false, $2, $3 from collect.response where survey_id = $1`,
		[closed.surveyId, names.reason, iowa.personId],
	);
}

/** What review leaves of a grower: words of calls, a code for what was told in words, a reason that names the grower. */
async function keepReview({ surveyId, operationId }: AnswerPlace, names: Names): Promise<void> {
	const { rows } = await owner.query(
		`insert into collect.edit_finding (response_id, check_kind, check_key, question_key, about, about_key)
		select response_id, 'logic', 'said', 'comment', jsonb_build_array(jsonb_build_object('value', $3::text)), 'none'
		from collect.response where survey_id = $1 and operation_id = $2 returning edit_finding_id, response_id`,
		[surveyId, operationId, names.comment],
	);
	const { edit_finding_id: findingId, response_id: responseId } = rows[0];
	await owner.query("insert into collect.edit_finding_step (edit_finding_id, step, words) values ($1, 'asked', $2)", [
		findingId,
		names.contact,
	]);
	await owner.query(
		`insert into collect.correction (response_id, question_key, edit_finding_id, act, was, answer, reason, made_by)
		values ($1, 'comment', $2, 'coded', jsonb_build_object('value', $3::text), '{"codes": []}', $4, $5)`,
		[responseId, findingId, names.comment, names.contact, iowa.personId],
	);
}

function grant(personId: string, operationId: string) {
	return owner.query("insert into auth.role_grant (person_id, role, operation_id) values ($1, 'grower', $2)", [
		personId,
		operationId,
	]);
}

async function answered(viewer: Grower, operationId: string, comment: string): Promise<AnswerPlace> {
	const place = { surveyId: await addSurvey(iowa), operationId };
	await beginAnswering(viewer, place);
	const [step] = await stepKeysOf(viewer, place);
	await typeStep(viewer, place, step!, pounds(40, 4000, 4000));
	await typeStep(viewer, place, "next_year", { comment });
	expect(await submit(viewer, place)).toMatchObject({ outcome: "submitted" });
	return place;
}

function addRelease({ surveyId }: AnswerPlace) {
	return owner.query(
		`insert into collect.release_draft (survey_id, status, rules, audit, drafted_by)
		values ($1, 'approved', '{}', '{"passed": true}', $2)`,
		[surveyId, iowa.personId],
	);
}

const go = (viewer: Grower, operationId: string) => asGrower(viewer, (trx) => leave(trx, viewer, operationId));

/** The tables, of whichever schema, that hold a text in any column of any row. */
async function holding(text: string): Promise<string[]> {
	const { rows } = await everything.query<{ name: string }>(
		`select format('%I.%I', schemaname, tablename) as name from pg_tables
		where schemaname not in ('pg_catalog', 'information_schema') order by 1`,
	);
	const tables: string[] = [];
	for (const { name } of rows) {
		const found = await everything.query(
			`select from ${name} t where strpos(lower(to_jsonb(t)::text), lower($1)) > 0 limit 1`,
			[text],
		);
		if (found.rowCount) tables.push(name);
	}
	return tables;
}

async function held(names: Names): Promise<Record<string, string[]>> {
	const found: Record<string, string[]> = {};
	for (const [what, text] of Object.entries(names)) found[what] = await holding(text);
	return found;
}

const sent = async ({ surveyId, operationId }: AnswerPlace) => {
	const { rows } = await owner.query(
		`select s.answers, r.submitted_at is not null as counted, f.disposition,
			(select count(*)::int from collect.fact x where x.survey_id = $1 and x.operation_id = $2) as facts
		from collect.frame_operation f left join collect.response r using (survey_id, operation_id)
			left join collect.submission s using (response_id)
		where f.survey_id = $1 and f.operation_id = $2`,
		[surveyId, operationId],
	);
	return rows[0];
};

const listWork = ["directory.import_row", "directory.merge"];
const review = ["collect.correction", "collect.edit_finding_step"];

test("nothing by which a grower is known is left in any column of any table", async () => {
	const { names, operationId, viewer } = await grower();
	expect(await held(names)).toEqual({
		operation: [...listWork, "directory.operation", "directory.owner"],
		contact: ["collect.contact", ...review, ...listWork, "directory.operation", "directory.saved_view"],
		email: ["auth.person", ...listWork, "directory.operation"],
		phone: [...listWork, "directory.operation"],
		account: ["auth.person"],
		subject: ["auth.person"],
		comment: ["collect.answer", "collect.correction", "collect.edit_finding", "collect.submission"],
		unsent: ["collect.answer"],
		typed: ["collect.entry_draft"],
		reason: ["collect.late_decision"],
		cultivar: ["directory.planting"],
		longitude: ["directory.operation_pin"],
	});
	expect(await go(viewer, operationId)).toEqual({ people: [viewer.person?.personId] });
	expect(await held(names)).toEqual(Object.fromEntries(Object.keys(names).map((what) => [what, []])));
});

test("what came late beside counted answers is emptied, for no release rests on it", async () => {
	const { operationId, viewer, released } = await grower();
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, released.surveyId));
	const [step] = await stepKeysOf(viewer, released);
	await typeStep(viewer, released, step!, pounds(40, 4000, 4001));
	expect(await submit(viewer, released)).toMatchObject({ outcome: "submitted", version: 2 });
	const late = "collect.submission join collect.response using (response_id) where late and survey_id = $1";
	const told = `${late} and answers @? '$.answers[*] ? (@.value == 4001)'`;
	expect(await count(owner, told, [released.surveyId])).toBe(1);
	await go(viewer, operationId);
	expect(await count(owner, `${late} and answers = '{"answers": [], "plantings": []}'`, [released.surveyId])).toBe(1);
	const kept = "collect.submission join collect.response using (response_id) where not late and survey_id = $1";
	const counted = `${kept} and answers @? '$.answers[*] ? (@.value == 4000)'`;
	expect(await count(owner, counted, [released.surveyId])).toBe(1);
	const answers = "collect.answer join collect.response using (response_id) where survey_id = $1";
	expect(await count(owner, answers, [released.surveyId])).toBe(0);
});

test("answers on which a release rests stay without texts, and all others count nowhere and are empty", async () => {
	const { operationId, viewer, released, closed, open } = await grower();
	const before = await sent(released);
	expect(before.answers.answers.map(({ questionKey }: { questionKey: string }) => questionKey)).toContain("comment");
	expect((await sent(closed)).facts).toBeGreaterThan(0);
	await go(viewer, operationId);
	expect(await sent(released)).toEqual({
		...before,
		answers: {
			...before.answers,
			answers: before.answers.answers.filter(({ questionKey }: { questionKey: string }) => questionKey !== "comment"),
		},
	});
	expect(await sent(closed)).toEqual({
		answers: { plantings: [], answers: [] },
		counted: false,
		disposition: "refused",
		facts: 0,
	});
	expect(await sent(open)).toMatchObject({ answers: null, counted: false, disposition: "refused" });
	expect(
		await count(owner, "collect.answer a join collect.response r using (response_id) where r.survey_id = any ($1)", [
			[closed.surveyId, open.surveyId],
		]),
	).toBe(0);
	expect(
		await count(owner, "collect.answer a join collect.response r using (response_id) where r.survey_id = $1", [
			released.surveyId,
		]),
	).toBeGreaterThan(0);
});

test("links, sessions and grants end, also those of others who held the operation", async () => {
	const { operationId, personId, viewer, open } = await grower();
	const other = (await addPerson(owner, "Helper in the orchard", [])).personId;
	await grant(other, operationId);
	const token = await scopedTransaction({ kind: "network" }, (trx) =>
		createPersonalLink(trx, { ...open, expiresAt: new Date(Date.now() + 86_400_000) }),
	);
	const find = () => scopedTransaction({ kind: "network" }, (trx) => findLink(trx, token));
	const link = await find();
	expect(link).toBeDefined();
	const sessions = () =>
		count(owner, "auth.session where person_id = any ($1) or personal_link_id = $2", [
			[personId, other],
			link?.personalLinkId,
		]);
	for (const [person, personalLink] of [
		[personId, null],
		[other, null],
		[null, link?.personalLinkId],
	])
		await owner.query(
			`insert into auth.session (session_hash, person_id, personal_link_id, expires_at)
			values (gen_random_uuid()::text, $1, $2, now() + interval '1 day')`,
			[person, personalLink],
		);
	expect(await sessions()).toBe(3);

	const gone = await go(viewer, operationId);
	expect(gone).toEqual({ people: expect.arrayContaining([personId, other]) });
	expect(await find()).toBeUndefined();
	expect(await sessions()).toBe(0);
	expect(await count(owner, "auth.role_grant where operation_id = $1 and revoked_at is null", [operationId])).toBe(0);
});

test("who also holds another operation, or works here, keeps the account and is still named for that alone", async () => {
	const { names, operationId, personId, viewer } = await grower();
	const { rows } = await owner.query("select owner_id from directory.operation where operation_id = $1", [operationId]);
	const second = await addOperation(owner, { state: "19", name: names.operation });
	await owner.query("update directory.operation set owner_id = $2 where operation_id = $1", [second, rows[0].owner_id]);
	await grant(personId, second);
	const worker = (await addPerson(owner, "Del Fenwick", ["19"])).personId;
	await owner.query("insert into auth.role_grant (person_id, role, state_fips) values ($1, 'associate', '19')", [
		worker,
	]);
	await grant(worker, operationId);

	expect(await go(viewer, operationId)).toEqual({ people: [] });
	expect(await holding(names.account)).toEqual(["auth.person"]);
	expect(await holding("Del Fenwick")).toEqual(["auth.person"]);
	const owners = await owner.query(
		`select o.operation_id, o.name, w.name as owner from directory.operation o join directory.owner w using (owner_id)
		where o.operation_id = any ($1)`,
		[[operationId, second]],
	);
	expect(owners.rows).toEqual(
		expect.arrayContaining([
			{ operation_id: operationId, name: "", owner: "" },
			{ operation_id: second, name: names.operation, owner: expect.stringContaining("Zephyrine") },
		]),
	);
});

test("it is logged by nobody's name, and the desk's and the network's lists no longer hold the grower", async () => {
	const { operationId, personId, viewer } = await grower();
	const coordinator = { ...iowa, role: "coordinator" } as unknown as Coordinator;
	const asCoordinator = { kind: "desk" as const, stateFips: [] };
	const listed = () => asDesk(iowa, (trx) => listOperations(trx, iowa, OperationQuery.parse({ q: "" })));
	expect((await listed()).rows.map((row) => row.operationId)).toContain(operationId);
	await go(viewer, operationId);
	expect((await listed()).rows.map((row) => row.operationId)).not.toContain(operationId);
	const people = await scopedTransaction(asCoordinator, (trx) => listPeople(trx, coordinator));
	expect(people.map((row) => row.personId)).not.toContain(personId);
	const { rows } = await scopedTransaction(asCoordinator, (trx) =>
		listEvents(trx, coordinator, LogQuery.parse({ show: "operation" })),
	);
	expect(rows[0]).toMatchObject({ action: "operation.left", person: null, about: null, stateFips: "19" });
	expect(
		await count(owner, "log.event where action = 'operation.left' and subject_id = $1 and person_id is null", [
			operationId,
		]),
	).toBe(1);
});

test("leaving happens once, all of it or nothing", async () => {
	const { names, operationId, viewer } = await grower();
	const failing = asGrower(viewer, async (trx) => {
		await leave(trx, viewer, operationId);
		throw new Error("the machine stops");
	});
	await expect(failing).rejects.toThrow("the machine stops");
	expect((await held(names)).operation).toEqual([...listWork, "directory.operation", "directory.owner"]);

	const both = await Promise.all([go(viewer, operationId), go(viewer, operationId)]);
	expect(both.filter((outcome) => outcome === "not_found")).toHaveLength(1);
	expect(await count(owner, "log.event where action = 'operation.left' and subject_id = $1", [operationId])).toBe(1);
});

test("another grower's operation does not leave, though it is there", async () => {
	const { names, operationId } = await grower();
	const mine = growerOf(await addOperation(owner, { state: "19" }));
	expect(await go(mine, operationId)).toBe("not_found");
	expect((await held(names)).contact).toContain("directory.operation");
});

test("a submission can be trimmed by its grower alone, and nobody can make it say something else", async () => {
	const { viewer, released } = await grower();
	const before = await sent(released);
	const write = (scope: Parameters<typeof scopedTransaction>[0], answers: object) =>
		scopedTransaction(scope, async (trx) => {
			const done = await trx
				.updateTable("collect.submission")
				.set({ answers: JSON.stringify(answers) })
				.where("response_id", "in", (eb) =>
					eb.selectFrom("collect.response").select("response_id").where("survey_id", "=", released.surveyId),
				)
				.executeTakeFirst();
			return Number(done.numUpdatedRows);
		});
	const [first, ...others] = before.answers.answers;
	const changed = { ...before.answers, answers: [{ ...first, value: 4711 }, ...others] };
	const own = { kind: "grower" as const, operationIds: viewer.operationIds };
	await expect(write(own, changed)).rejects.toThrow("submission_is_frozen");
	for (const scope of [{ kind: "network" as const }, { kind: "desk" as const, stateFips: ["19"] }])
		expect(await write(scope, { ...before.answers, answers: others })).toBe(0);
	expect(await sent(released)).toEqual(before);
	expect(await write(own, { ...before.answers, answers: others })).toBe(1);
});

/** Sends the page's form as a signed-in grower. */
async function post(viewer: Grower, operationId: string, fields: Record<string, string>) {
	const context = new RouterContextProvider();
	const { operationIds, person } = viewer;
	const grants = { coordinator: false, researcher: false, stateFips: [], operationIds };
	context.set(visitorContext, { person, link: null, grants });
	const session = createSession({ personId: person!.personId }) as VisitorSession;
	context.set(sessionContext, session);
	const address = `https://survey.example/orchard/${operationId}/leave`;
	const request = new Request(address, { method: "POST", body: new URLSearchParams(fields) });
	const answer = await action({ context, request, params: { operationId } } as unknown as Parameters<typeof action>[0]);
	return { answer, session };
}

test("without the tick nothing happens; with it the grower is signed out of an account that is no more", async () => {
	const { names, operationId, viewer } = await grower();
	const { answer: refused } = await post(viewer, operationId, {});
	expect(refused).toMatchObject({
		init: { status: 400 },
		data: { problems: [{ field: "sure", code: "agreement_needed" }] },
	});
	expect((await held(names)).contact).toContain("directory.operation");

	const { answer, session } = await post(viewer, operationId, { sure: "on" });
	const { status, headers } = answer as Response;
	expect([status, headers.get("location"), headers.get("clear-site-data")]).toEqual([303, "/", '"storage"']);
	expect(session.has("personId")).toBe(false);
	expect((await held(names)).contact).toEqual([]);
});

test("who goes on with another operation stays signed in", async () => {
	const { operationId, viewer } = await grower();
	const second = await addOperation(owner, { state: "19" });
	await addPlanting(owner, second, { crop: "plum" });
	await grant(viewer.person!.personId, second);
	const { answer, session } = await post({ ...viewer, operationIds: [operationId, second] }, operationId, {
		sure: "on",
	});
	expect((answer as Response).headers.get("location")).toBe("/orchard");
	expect(session.get("personId")).toBe(viewer.person?.personId);
});
