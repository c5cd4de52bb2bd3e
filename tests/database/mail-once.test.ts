import { fork } from "node:child_process";
import { once } from "node:events";
import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countMailings, sendInvitations } from "#app/collect/invitations.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { markReturned } from "#app/collect/reach.server.ts";
import { sendMail } from "#app/jobs/send-mail.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addMailing, findMailingRow, inviteGrower, startMailServer } from "./mail-fixture.ts";
import { addPerson, answerFor, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let mailServer: Awaited<ReturnType<typeof startMailServer>>;

beforeAll(async () => {
	mailServer = await startMailServer();
	database = await createTestDatabase();
	useDatabase(database, { SMTP_URL: mailServer.url });
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await mailServer.stop();
	await owner.end();
	await database.drop();
});
beforeEach(() => void mailServer.reset());

/** Whether nobody has the mailing in hand (`takeMailing`). */
async function isFree(mailingId: string): Promise<boolean> {
	const { rows } = await owner.query(
		"select pg_try_advisory_xact_lock(hashtextextended('send_mail:' || $1::text, 0)) as free",
		[mailingId],
	);
	return rows[0].free;
}

const invite = (surveyId: string) => asDesk(iowa, (trx) => sendInvitations(trx, iowa, surveyId));

test("a worker killed between the server's yes and its own note sends nothing twice", async () => {
	const { mailingId, surveyId } = await inviteGrower(owner, iowa);
	const worker = fork("tests/database/mail-sender.ts", [mailingId], { execArgv: ["--import", "tsx"] });
	// Killed with the whole mail in the server's hands, before its answer can be noted.
	mailServer.onMail = () => worker.kill("SIGKILL");
	await once(worker, "exit");
	expect(mailServer.received).toHaveLength(1);
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ sent_at: null, failed_at: null });

	mailServer.onMail = undefined;
	// Its attempt ends when the database notices that it is gone, which takes a moment on a busy machine.
	await expect.poll(() => isFree(mailingId)).toBe(true);
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(1);
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ failure: "uncertain", disposition: "not_reached" });
	// The desk sees it, and may invite anew: a mail of another wave, by somebody's decision.
	expect(await invite(surveyId)).toEqual({ queued: 1 });
});

test("a connection that ends after the whole mail was handed over is not tried again", async () => {
	const { mailingId } = await inviteGrower(owner, iowa);
	mailServer.trouble = "hang up";
	await sendMail({ mailingId });
	mailServer.trouble = null;
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(1);
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ sent_at: null, failure: "uncertain" });
});

test("a mail server that is away is tried again, and given up only at the queue's last try", async () => {
	const { mailingId } = await inviteGrower(owner, iowa);
	mailServer.trouble = { at: "from", code: 421 };
	await expect(sendMail({ mailingId })).rejects.toThrow();
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ tried_at: null, failed_at: null });
	await expect(sendMail({ mailingId }, true)).rejects.toThrow();
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ failure: "server_away", mail_returned_at: null });
});

test("an address that took no mail gets none of any kind until it is mended or tried anew", async () => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	mailServer.trouble = { at: "to", code: 550 };
	await sendMail({ mailingId });
	mailServer.trouble = null;
	expect((await findMailingRow(owner, mailingId)).mail_returned_at).toBeInstanceOf(Date);
	expect(await invite(surveyId)).toEqual({ queued: 0 });
	const receipt = await addMailing(owner, surveyId, operationId, "receipt");
	await sendMail({ mailingId: receipt });
	expect(mailServer.received).toEqual([]);

	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 2))).toMatchObject({ queued: 1 });
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ mail_returned_at: null, disposition: "not_reached" });
});

test("a bounce of the old address marks neither the one that was mended meanwhile nor its operation", async () => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	const mark = (email: string) =>
		scopedTransaction({ kind: "network" }, (trx) => markReturned(trx, { surveyId, operationId, email }));
	await owner.query("update directory.operation set email = 'new@quailbend.example' where operation_id = $1", [
		operationId,
	]);
	await mark("ada@quailbend.example");
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ mail_returned_at: null, disposition: "not_reached" });
	await mark("new@quailbend.example");
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ disposition: "undeliverable" });
});

test.each([
	["refused", "update collect.frame_operation set disposition = 'refused' where operation_id = $1"],
	["not_eligible", "update collect.frame_operation set disposition = 'not_eligible' where operation_id = $1"],
	["left", "update directory.operation set status = 'left' where operation_id = $1"],
	["not_wanted", "update directory.operation set mail_wanted = false where operation_id = $1"],
])("no new link and no mail goes to an operation that is %s", async (why, statement) => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 2))).toMatchObject({ queued: 1 });
	await owner.query(statement, [operationId]);
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 3))).toBe(why);
	const reminder = await addMailing(owner, surveyId, operationId, "reminder");
	await sendMail({ mailingId });
	await sendMail({ mailingId: reminder });
	expect(mailServer.received).toEqual([]);
	expect(await asDesk(iowa, (trx) => countMailings(trx, iowa, surveyId))).toMatchObject({ toRemind: 0, toInvite: 0 });
});

test("whoever took an answer back gets no new link, reminder or thank-you", async () => {
	const { surveyId, operationId } = await inviteGrower(owner, iowa);
	await answerFor(owner, surveyId, operationId);
	await owner.query(
		`update collect.response set withdrawn_at = now(), receipt_code = null, first_submitted_at = null, submitted_at = null
		where operation_id = $1`,
		[operationId],
	);
	await owner.query("update collect.frame_operation set disposition = 'refused' where operation_id = $1", [
		operationId,
	]);
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 2))).toBe("withdrew");
	for (const kind of ["reminder", "thank_you"]) {
		await sendMail({ mailingId: await addMailing(owner, surveyId, operationId, kind) });
	}
	expect(mailServer.received).toEqual([]);
});
