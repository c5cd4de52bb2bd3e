import { sql } from "kysely";
import type { Client } from "pg";
import { createSession, RouterContextProvider } from "react-router";
import { afterAll, beforeAll, expect, test } from "vitest";
import { checkApiKey, makeApiKey } from "#app/auth/api-keys.server.ts";
import { setGrantEnd } from "#app/auth/grant-end.server.ts";
import { GrantForm, grantRole, listPeople, revokeGrant } from "#app/auth/grants.server.ts";
import { decideAccess, findOwnRequest, listAccessRequests, requestAccess } from "#app/auth/research-access.server.ts";
import { findOwnTerm } from "#app/auth/research-term.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { sessionContext, type VisitorSession } from "#app/auth/session.server.ts";
import type { Coordinator, Person, Researcher } from "#app/auth/viewer.ts";
import { visitorContext, visitorMiddleware } from "#app/auth/visitor.server.ts";
import { tellGrantEnd, watchGrantEnds } from "#app/jobs/grant-ends.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { startMailServer } from "./mail-fixture.ts";
import { addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let coordinator: Coordinator;
let mailServer: Awaited<ReturnType<typeof startMailServer>>;
let today: string;

beforeAll(async () => {
	mailServer = await startMailServer();
	database = await createTestDatabase();
	useDatabase(database, { SMTP_URL: mailServer.url });
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	const person = await addPerson(owner, "Marit Osgood", []);
	coordinator = { ...person, role: "coordinator" } as unknown as Coordinator;
	await owner.query("insert into auth.role_grant (person_id, role) values ($1, 'coordinator')", [person.personId]);
	today = await dayIn(0);
});
afterAll(async () => {
	await mailServer.stop();
	await owner.end();
	await database.drop();
});

/** A day on the network's clock, so many days from today. */
async function dayIn(days: number): Promise<string> {
	const { rows } = await owner.query("select (auth.network_today() + $1::int)::text as day", [days]);
	return rows[0].day;
}
const asCoordinator = <T>(work: (trx: Trx) => Promise<T>) => scopedTransaction({ kind: "desk", stateFips: [] }, work);
const newPerson = async (name = "Theo Brandvold") => (await addPerson(owner, name, [])).personId;

function give(personId: string, role: string, endsOn?: string) {
	const form = GrantForm.parse({ step: "grant", personId, role, stateFips: "19", endsOn });
	if (form.step !== "grant") throw new Error("not a grant");
	return asCoordinator((trx) => grantRole(trx, coordinator, form));
}
const setEnd = (roleGrantId: string, endsOn: string | null) =>
	asCoordinator((trx) => setGrantEnd(trx, coordinator, roleGrantId, endsOn));
const end = (roleGrantId: string) => asCoordinator((trx) => revokeGrant(trx, coordinator, roleGrantId));

/** The grant that a person holds or held last. */
async function grantOf(personId: string): Promise<string> {
	const { rows } = await owner.query(
		"select role_grant_id from auth.role_grant where person_id = $1 order by granted_at desc limit 1",
		[personId],
	);
	return rows[0].role_grant_id;
}
/** As days pass: the last day of a grant moves back. */
const letPass = (personId: string, day: string) =>
	owner.query("update auth.role_grant set ends_on = $2 where person_id = $1 and revoked_at is null", [personId, day]);

/** What an open session may do at its next request. */
async function rightsOf(personId: string) {
	const context = new RouterContextProvider();
	context.set(sessionContext, createSession({ personId }) as VisitorSession);
	const given = { context, request: new Request("https://survey.example/desk"), params: {} };
	await visitorMiddleware(given as never, () => Promise.resolve(new Response()));
	return context.get(visitorContext).grants;
}

/** How many letters about an end wait to be sent. */
const queued = async () => {
	const { rows } = await asCoordinator((trx) =>
		sql<{ n: number }>`select count(*)::int as n from graphile_worker.jobs
			where task_identifier = 'tell_grant_end'`.execute(trx),
	);
	return rows[0]!.n;
};

test("a grant holds on its last day and no more on the next, in sessions that are open already", async () => {
	const personId = await newPerson();
	expect(await give(personId, "associate", today)).toBe("granted");
	expect(await rightsOf(personId)).toMatchObject({ stateFips: ["19"] });
	await letPass(personId, await dayIn(-1));
	expect(await rightsOf(personId)).toMatchObject({ stateFips: [] });
	const people = await asCoordinator((trx) => listPeople(trx, coordinator));
	expect(people.find((one) => one.personId === personId)?.grants).toEqual([]);
	expect(await count(owner, "auth.role_grant where person_id = $1", [personId])).toBe(1);
});

test("a grant that is ended by hand ends at the next request of an open session", async () => {
	const personId = await newPerson();
	await give(personId, "associate");
	expect(await rightsOf(personId)).toMatchObject({ stateFips: ["19"] });
	expect(await end(await grantOf(personId))).toBe("revoked");
	expect(await rightsOf(personId)).toMatchObject({ stateFips: [] });
});

test("one that has ended stands in the way of no new one, and is noted as ended at the end of its day", async () => {
	const personId = await newPerson();
	await give(personId, "researcher", today);
	const yesterday = await dayIn(-1);
	await letPass(personId, yesterday);
	expect(await give(personId, "researcher", await dayIn(90))).toBe("granted");
	expect(await rightsOf(personId)).toMatchObject({ researcher: true });
	const { rows } = await owner.query(
		`select revoked_by, (revoked_at at time zone 'America/Chicago')::text as ended from auth.role_grant
		where person_id = $1 and revoked_at is not null`,
		[personId],
	);
	expect(rows).toEqual([{ revoked_by: null, ended: `${today} 00:00:00` }]);
	const told = "log.event where action = 'grant.ended' and subject_id = $1 and person_id is null";
	expect(await count(owner, told, [personId])).toBe(1);
});

test("the same grant with another last day is refused, so that no end is moved unseen", async () => {
	const personId = await newPerson();
	const day = await dayIn(30);
	expect(await give(personId, "associate", day)).toBe("granted");
	expect(await give(personId, "associate", day)).toBe("granted");
	expect(await give(personId, "associate")).toBe("already_held");
	expect(await count(owner, "auth.role_grant where person_id = $1 and ends_on = $2", [personId, day])).toBe(1);
});

test("a last day that is over or mistyped by a century is refused, for a new grant and an old one", async () => {
	const personId = await newPerson();
	expect(await give(personId, "associate", await dayIn(-1))).toBe("end_past");
	expect(await give(personId, "associate", `21${today.slice(2)}`)).toBe("end_far");
	expect(await count(owner, "auth.role_grant where person_id = $1", [personId])).toBe(0);
	await give(personId, "associate");
	const grant = await grantOf(personId);
	expect(await setEnd(grant, await dayIn(-1))).toBe("end_past");
	expect(await setEnd(grant, await dayIn(5))).toBe("end_set");
	expect(await setEnd(grant, null)).toBe("end_set");
	expect(GrantForm.safeParse({ step: "grant", personId, role: "researcher", endsOn: "soon" }).success).toBe(false);
});

test("there is always a coordinator whose grant has no last day", async () => {
	const own = await grantOf(coordinator.personId);
	expect(await setEnd(own, await dayIn(30))).toBe("last_coordinator");
	const visiting = await newPerson("Visiting coordinator");
	await give(visiting, "coordinator", await dayIn(30));
	// The visitor's grant ends by itself: it does not make the other one dispensable.
	expect(await setEnd(own, await dayIn(60))).toBe("last_coordinator");
	expect(await end(own)).toBe("last_coordinator");
	const second = await newPerson("Second coordinator");
	await give(second, "coordinator");
	const grants = [own, await grantOf(second)];
	const day = await dayIn(60);
	const outcomes = await Promise.all(grants.map((grant) => setEnd(grant, day)));
	expect(outcomes.toSorted()).toEqual(["end_set", "last_coordinator"]);
	const endless = "auth.role_grant where role = 'coordinator' and revoked_at is null and ends_on is null";
	expect(await count(owner, endless)).toBe(1);
	await Promise.all(grants.map((grant) => setEnd(grant, null)));
	expect(await end(await grantOf(visiting))).toBe("revoked");
});

test("a week before, its holder is told once by mail in their language, and anew when the day is moved", async () => {
	const personId = await newPerson("Ines Quintana");
	await owner.query("update auth.person set email = 'ines@fourrivers.example', language = 'es' where person_id = $1", [
		personId,
	]);
	await give(personId, "associate", await dayIn(8));
	const roleGrantId = await grantOf(personId);
	const before = await queued();
	await watchGrantEnds();
	expect(await queued()).toBe(before);
	expect(await setEnd(roleGrantId, await dayIn(7))).toBe("end_set");
	await watchGrantEnds();
	await watchGrantEnds();
	expect(await queued()).toBe(before + 1);
	await tellGrantEnd({ roleGrantId });
	const [mail] = mailServer.received;
	expect(mail?.to).toMatchObject({ text: expect.stringContaining("ines@fourrivers.example") as string });
	expect(mail?.subject).toContain("su función termina después del");
	expect(mail?.text).toContain("Iowa");
	expect(await setEnd(roleGrantId, await dayIn(3))).toBe("end_set");
	await watchGrantEnds();
	expect(await queued()).toBe(before + 2);
	// Nothing is told of what has ended meanwhile.
	await end(roleGrantId);
	await tellGrantEnd({ roleGrantId });
	expect(mailServer.received).toHaveLength(1);
});

/** A person asks for access and the coordinator says yes. */
async function askAndApprove(person: Person, purpose: string): Promise<void> {
	expect(await requestAccess(person, { affiliation: "Pomology", purpose, agreed: "on" })).toBe("requested");
	const [request] = await asCoordinator((trx) => listAccessRequests(trx, coordinator));
	const decision = { accessRequestId: request!.accessRequestId, decision: "approved" as const, reason: "" };
	expect(await asCoordinator((trx) => decideAccess(trx, coordinator, decision))).toBe("approved");
}
/** The day a year after one that lies so many days from today. */
async function yearAfter(days: number): Promise<string> {
	const { rows } = await owner.query("select (auth.network_today() + $1::int + interval '1 year')::date::text as day", [
		days,
	]);
	return rows[0].day;
}

test("a researcher's approval holds for a year, and asking near its end adds a year to its last day", async () => {
	const person = (await addPerson(owner, "Jonas Weir", [])) as unknown as Person;
	expect(await findOwnTerm(person)).toBeNull();
	await askAndApprove(person, "How far frost reaches.");
	expect(await findOwnTerm(person)).toMatchObject({ holds: true, renewable: false, lastDay: await yearAfter(0) });
	const again = { affiliation: "Pomology", purpose: "More frost.", agreed: "on" as const };
	expect(await requestAccess(person, again)).toBe("not_yet");

	await letPass(person.personId, await dayIn(31));
	expect(await requestAccess(person, again)).toBe("not_yet");
	await letPass(person.personId, await dayIn(30));
	await owner.query("update auth.person set email = 'jonas@fourrivers.example' where person_id = $1", [
		person.personId,
	]);
	await watchGrantEnds();
	const before = mailServer.received.length;
	await tellGrantEnd({ roleGrantId: await grantOf(person.personId) });
	expect(mailServer.received[before]!.text).toContain("/dataroom/access");
	expect(await findOwnTerm(person)).toMatchObject({ holds: true, renewable: true });
	expect(await findOwnRequest(person)).toMatchObject({ purpose: "How far frost reaches." });
	await askAndApprove(person, "More frost.");
	expect(await findOwnTerm(person)).toMatchObject({ holds: true, renewable: false, lastDay: await yearAfter(30) });
	// The new end will be told anew.
	expect(await count(owner, "auth.role_grant where person_id = $1 and end_told_at is null", [person.personId])).toBe(1);
});

test("keys rest when a researcher's year is over, and open again with the next one", async () => {
	const person = (await addPerson(owner, "Mina Holt", [])) as unknown as Person;
	await askAndApprove(person, "Bloom and bees.");
	const researcher = { ...person, role: "researcher" } as Researcher;
	const made = await makeApiKey(researcher, { label: "Notebook", scopes: ["figures"], days: "365" });
	if (made === "too_many_keys") throw new Error(made);
	expect(await checkApiKey(made.key)).toMatchObject({ scopes: ["figures"] });

	const yesterday = await dayIn(-1);
	await letPass(person.personId, yesterday);
	expect(await checkApiKey(made.key)).toBe("access_ended");
	expect(await checkApiKey(`${made.key}x`)).toBe("not_valid");
	// Whether the daily job has noted it or not.
	await watchGrantEnds();
	expect(await findOwnTerm(person)).toMatchObject({ holds: false, lastDay: yesterday, renewable: true });
	expect(await rightsOf(person.personId)).toMatchObject({ researcher: false });

	await askAndApprove(person, "Bloom and bees, another year.");
	const [listed] = await asCoordinator((trx) => listAccessRequests(trx, coordinator));
	expect(listed).toMatchObject({ holds: true, lastDay: await yearAfter(0) });
	expect(await checkApiKey(made.key)).toMatchObject({ scopes: ["figures"] });
	expect(await rightsOf(person.personId)).toMatchObject({ researcher: true });
});

test("access given by hand without a last day stays so when a request that waited is approved", async () => {
	const person = (await addPerson(owner, "Otis Fell", [])) as unknown as Person;
	await requestAccess(person, { affiliation: "Pomology", purpose: "Apples.", agreed: "on" });
	expect(await give(person.personId, "researcher")).toBe("granted");
	const [request] = await asCoordinator((trx) => listAccessRequests(trx, coordinator));
	const decision = { accessRequestId: request!.accessRequestId, decision: "approved" as const, reason: "" };
	expect(await asCoordinator((trx) => decideAccess(trx, coordinator, decision))).toBe("approved");
	expect(await findOwnTerm(person)).toMatchObject({ holds: true, lastDay: null, renewable: false });
	expect(await count(owner, "auth.role_grant where person_id = $1", [person.personId])).toBe(1);
});
