import { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { acceptInvitation, findInvitation } from "#app/auth/accepting.server.ts";
import { recordSignIn } from "#app/auth/accounts.server.ts";
import {
	InvitationForm,
	invite,
	inviteAgain,
	listInvitations,
	type NewInvitation,
	withdrawInvitation,
} from "#app/auth/invitations.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { mailInvitation, queueInvitation } from "#app/jobs/mail-invitation.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { startMailServer } from "./mail-fixture.ts";
import { addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let coordinator: Coordinator;
let mailServer: Awaited<ReturnType<typeof startMailServer>>;
let next = 0;

beforeAll(async () => {
	mailServer = await startMailServer();
	database = await createTestDatabase();
	useDatabase(database, { SMTP_URL: mailServer.url });
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	coordinator = { ...(await addPerson(owner, "Marit Osgood", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await mailServer.stop();
	await owner.end();
	await database.drop();
});
beforeEach(() => {
	mailServer.reset();
});

const asCoordinator = <T>(work: (trx: Trx) => Promise<T>) => scopedTransaction({ kind: "desk", stateFips: [] }, work);
const none = <T>(work: (trx: Trx) => Promise<T>) => scopedTransaction({ kind: "none" }, work);
const newAddress = () => `person${++next}@college.example`;
const formOf = (given: Partial<NewInvitation>) =>
	InvitationForm.parse({
		step: "invite",
		role: "associate",
		states: ["19", "55"],
		language: "en",
		...given,
	}) as NewInvitation;

async function inviteTo(email: string, given: Partial<NewInvitation> = {}): Promise<string> {
	const sent = await asCoordinator(async (trx) => {
		const outcome = await invite(trx, coordinator, formOf({ email, ...given }));
		if ("invitationId" in outcome) await queueInvitation(trx, outcome.invitationId);
		return outcome;
	});
	if ("refused" in sent) throw new Error(sent.refused);
	return sent.invitationId;
}

/** The token of the newest letter. */
function tokenSent(): string {
	const text = mailServer.received.at(-1)?.text ?? "";
	return /https:\/\/survey\.example\/invitation\/([\w-]{43})\s/.exec(text)?.[1] ?? "no link";
}

/** Signs in as the callback does, with an invitation brought along. */
function signIn(token: string, { email, emailVerified = true }: { email: string | null; emailVerified?: boolean }) {
	const identity = {
		issuer: "https://id.example",
		subject: `s-${email}`,
		displayName: "Somebody",
		email,
		emailVerified,
	};
	return none(async (trx) => {
		const { personId } = await recordSignIn(trx, identity);
		return { personId, outcome: await acceptInvitation(trx, personId, identity, token) };
	});
}
const stateOf = async (invitationId: string) =>
	(await asCoordinator((trx) => listInvitations(trx, coordinator))).find((one) => one.invitationId === invitationId)
		?.state;
const grants = async (personId: string) => {
	const { rows } = await owner.query(
		`select role, state_fips, ends_on::text, granted_by from auth.role_grant where person_id = $1 and revoked_at is null
		order by state_fips`,
		[personId],
	);
	return rows;
};

test("a letter in the chosen language brings a link, and whoever signs in with the verified address has the role", async () => {
	const email = newAddress();
	const invitationId = await inviteTo(email, { language: "es", endsOn: "2031-05-04" });
	expect(await stateOf(invitationId)).toBe("waiting");
	await mailInvitation({ invitationId });
	const [mail] = mailServer.received;
	expect(mail?.subject).toContain("tiene una invitación");
	expect(mail?.text).toContain("Iowa, Wisconsin");
	expect(mail?.text).toContain("4 de mayo de 2031");
	expect(await stateOf(invitationId)).toBe("sent");
	const token = tokenSent();
	const { rows } = await owner.query(
		"select to_jsonb(i)::text as row from auth.invitation i where invitation_id = $1",
		[invitationId],
	);
	expect(rows[0].row).not.toContain(token);

	// Looking at the link, as mail scanners do, changes nothing and tells no address.
	const seen = await findInvitation(token);
	await findInvitation(token);
	expect(JSON.stringify(seen)).not.toContain(email);
	const { personId, outcome } = await signIn(token, { email: email.toUpperCase() });
	expect(outcome).toBe("accepted");
	const given = { role: "associate", ends_on: "2031-05-04", granted_by: coordinator.personId };
	expect(await grants(personId)).toEqual([
		{ ...given, state_fips: "19" },
		{ ...given, state_fips: "55" },
	]);
	expect(await stateOf(invitationId)).toBe("accepted");
	const events = await owner.query(
		"select action, person_id, detail from log.event where subject_id = $1 order by event_id",
		[invitationId],
	);
	expect(events.rows.map(({ action }) => action)).toEqual(["invitation.sent", "invitation.accepted"]);
	expect(JSON.stringify(events.rows)).not.toContain(email);
});

test("a link works once", async () => {
	const email = newAddress();
	await mailInvitation({ invitationId: await inviteTo(email, { role: "coordinator" }) });
	const token = tokenSent();
	const both = await Promise.all([1, 2].map(() => signIn(token, { email }).catch(() => ({ outcome: "failed" }))));
	expect(both.filter(({ outcome }) => outcome === "accepted")).toHaveLength(1);
	expect((await signIn(token, { email })).outcome).toBe("not_open");
	expect(await findInvitation(token)).toBeUndefined();
});

test("another person's sign-in, an address nobody verified, and a made-up link give nothing and use nothing up", async () => {
	const email = newAddress();
	await mailInvitation({ invitationId: await inviteTo(email, { role: "researcher", states: [] }) });
	const token = tokenSent();
	const other = await signIn(token, { email: newAddress() });
	expect(other.outcome).toBe("other_address");
	expect(await grants(other.personId)).toEqual([]);
	expect((await signIn(token, { email: null })).outcome).toBe("other_address");
	const unverified = await signIn(token, { email, emailVerified: false });
	expect(unverified.outcome).toBe("not_verified");
	expect(await grants(unverified.personId)).toEqual([]);
	for (const made of ["", "x", "A".repeat(43), `${token}A`, token.replace(/.$/, "")])
		expect((await signIn(made, { email })).outcome).toBe("not_open");
	const right = await signIn(token, { email });
	expect(right.outcome).toBe("accepted");
	expect(await grants(right.personId)).toMatchObject([{ role: "researcher", state_fips: null }]);
});

test("after two weeks it has expired; sent again it begins anew, and the older link is dead", async () => {
	const email = newAddress();
	const invitationId = await inviteTo(email);
	await mailInvitation({ invitationId });
	const first = tokenSent();
	await owner.query("update auth.invitation set expires_at = now() - interval '1 second' where invitation_id = $1", [
		invitationId,
	]);
	expect(await stateOf(invitationId)).toBe("expired");
	expect((await signIn(first, { email })).outcome).toBe("not_open");
	expect(await asCoordinator((trx) => inviteAgain(trx, coordinator, invitationId))).toEqual({ invitationId });
	await mailInvitation({ invitationId });
	const second = tokenSent();
	expect(second).not.toBe(first);
	expect((await signIn(first, { email })).outcome).toBe("not_open");
	expect((await signIn(second, { email })).outcome).toBe("accepted");
	expect(await asCoordinator((trx) => inviteAgain(trx, coordinator, invitationId))).toEqual({ refused: "not_found" });
});

test("a withdrawn invitation opens nothing, and its letter does not go out any more", async () => {
	const email = newAddress();
	const invitationId = await inviteTo(email);
	await mailInvitation({ invitationId });
	const token = tokenSent();
	expect(await asCoordinator((trx) => withdrawInvitation(trx, coordinator, invitationId))).toBe("withdrawn");
	expect((await signIn(token, { email })).outcome).toBe("not_open");
	const waiting = await inviteTo(newAddress());
	await asCoordinator((trx) => withdrawInvitation(trx, coordinator, waiting));
	await mailInvitation({ invitationId: waiting });
	expect(mailServer.received).toHaveLength(1);
	expect(await asCoordinator((trx) => withdrawInvitation(trx, coordinator, waiting))).toBe("not_found");
});

test("a letter goes once; one that the server will not take is shown as not delivered", async () => {
	const invitationId = await inviteTo(newAddress());
	await mailInvitation({ invitationId });
	await mailInvitation({ invitationId });
	expect(mailServer.received).toHaveLength(1);
	const refused = await inviteTo(newAddress());
	mailServer.trouble = { at: "to", code: 550 };
	await mailInvitation({ invitationId: refused });
	expect(await stateOf(refused)).toBe("failed");
	const later = await inviteTo(newAddress());
	mailServer.trouble = { at: "to", code: 451 };
	await expect(mailInvitation({ invitationId: later })).rejects.toThrow();
	expect(await stateOf(later)).toBe("waiting");
	await expect(mailInvitation({ invitationId: later }, true)).rejects.toThrow();
	expect(await stateOf(later)).toBe("failed");
});

test("nobody is invited twice to one role, to no state, or with a last day that is over", async () => {
	const email = newAddress();
	await inviteTo(email);
	const again = (given: Partial<NewInvitation>) =>
		asCoordinator((trx) => invite(trx, coordinator, formOf({ email, ...given })));
	expect(await again({ email: email.toUpperCase() })).toEqual({ refused: "already_invited" });
	expect(await again({ role: "coordinator" })).toHaveProperty("invitationId");
	expect(await again({ states: [] })).toEqual({ refused: "states_needed" });
	expect(await again({ states: ["06"] })).toEqual({ refused: "states_needed" });
	expect(await again({ endsOn: "2020-01-01" })).toEqual({ refused: "end_past" });
	expect(
		InvitationForm.safeParse({ step: "invite", role: "grower", email, states: ["19"], language: "en" }).success,
	).toBe(false);
	expect(await count(owner, "auth.invitation where lower(email) = $1", [email])).toBe(2);
});

test("the application can rewrite neither to whom nor to what somebody was invited, nor take an invitation away", async () => {
	await inviteTo(newAddress());
	const app = new Client({ connectionString: database.appUrl });
	await app.connect();
	for (const change of [
		"update auth.invitation set email = 'me@elsewhere.example'",
		"update auth.invitation set role = 'coordinator'",
		"delete from auth.invitation",
	])
		await expect(app.query(change), change).rejects.toMatchObject({ code: "42501" });
	await app.end();
	expect(await count(owner, "auth.invitation where email like '%@college.example'")).toBeGreaterThan(0);
});
