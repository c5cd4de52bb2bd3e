import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { countMailings } from "#app/collect/invitations.server.ts";
import { findMailWish, setMailWish } from "#app/directory/mail-wish.server.ts";
import { findOwnSettings, saveOwnSettings } from "#app/directory/own-settings.server.ts";
import { sendMail } from "#app/jobs/send-mail.server.ts";
import { operationOfStopToken, stopTokenOf } from "#app/mail/stop-token.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addMailing, findMailingRow, inviteGrower, startMailServer } from "./mail-fixture.ts";
import {
	addOperation,
	addPerson,
	answerFor,
	asDesk,
	connectOwner,
	count,
	loadPlaces,
	useDatabase,
} from "./surveys-fixture.ts";

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

const wish = (operationId: string, wanted: boolean) =>
	scopedTransaction({ kind: "network" }, (trx) => setMailWish(trx, operationId, wanted));
const growerOf = (operationId: string): Grower => ({
	role: "grower",
	operationIds: [operationId],
	link: null,
	person: null,
});
const asGrower = <T>(operationId: string, work: Parameters<typeof scopedTransaction<T>>[1]) =>
	scopedTransaction({ kind: "grower", operationIds: [operationId] }, work);

test("each mail that nobody asked for says in headers, text and HTML how it is stopped by one press", async () => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	await sendMail({ mailingId });
	await sendMail({ mailingId: await addMailing(owner, surveyId, operationId, "reminder") });
	await answerFor(owner, surveyId, operationId);
	await sendMail({ mailingId: await addMailing(owner, surveyId, operationId, "thank_you") });
	expect(mailServer.received).toHaveLength(3);
	for (const mail of mailServer.received) {
		const lines = Object.fromEntries(mail.headerLines.map(({ key, line }) => [key, line.replace(/\r\n\s/g, " ")]));
		// The address and nothing beside it: a comment in this header is not understood everywhere.
		const address = /^List-Unsubscribe:\s*<(https:\/\/survey\.example\/stop-mail\/[\w-]{64})>$/i.exec(
			lines["list-unsubscribe"] ?? "",
		)?.[1];
		expect(address).toBeDefined();
		expect(lines["list-unsubscribe-post"]).toMatch(/^List-Unsubscribe-Post:\s*List-Unsubscribe=One-Click$/i);
		expect(mail.text).toContain(address);
		expect(mail.html).toContain(`href="${address}"`);
		expect(operationOfStopToken(address!.split("/").at(-1)!)).toBe(operationId);
	}
});

test("a receipt carries no such header: it was asked for by sending in", async () => {
	const { surveyId, operationId } = await inviteGrower(owner, iowa);
	await answerFor(owner, surveyId, operationId);
	await wish(operationId, false);
	await sendMail({ mailingId: await addMailing(owner, surveyId, operationId, "receipt") });
	expect(mailServer.received).toHaveLength(1);
	expect(mailServer.received[0]?.headerLines.map(({ key }) => key)).not.toContain("list-unsubscribe");
	expect(mailServer.received[0]?.text).not.toContain("/stop-mail/");
});

test("a token opens one operation, and none that was altered opens any", async () => {
	const [mine, other] = [await addOperation(owner, { state: "19" }), await addOperation(owner, { state: "19" })];
	const token = stopTokenOf(mine);
	expect(operationOfStopToken(token)).toBe(mine);
	const swapped = stopTokenOf(other).slice(0, 21) + token.slice(21);
	const turned = token.slice(0, -1) + (token.endsWith("A") ? "B" : "A");
	for (const wrong of ["", "x", mine, swapped, turned, token.slice(1), `${token}A`, token.replace(/.$/, "=")])
		expect(operationOfStopToken(wrong), wrong).toBeUndefined();
});

test("stopped mail stays in no queue, comes again when asked for, and is the wish that the settings show", async () => {
	const { mailingId, surveyId, operationId } = await inviteGrower(owner, iowa);
	expect(await wish(operationId, false)).toBe("set");
	expect(await wish(operationId, false)).toBe("set");
	await sendMail({ mailingId });
	expect(mailServer.received).toEqual([]);
	expect(await findMailingRow(owner, mailingId)).toMatchObject({ failure: "not_wanted" });
	const settings = () => asGrower(operationId, (trx) => findOwnSettings(trx, growerOf(operationId), operationId));
	expect((await settings())?.settings.mailWanted).toBe(false);
	const counts = () => asDesk(iowa, (trx) => countMailings(trx, iowa, surveyId));
	expect(await counts()).toMatchObject({ toInvite: 0, toRemind: 0 });

	await wish(operationId, true);
	expect((await settings())?.settings.mailWanted).toBe(true);
	expect(await counts()).toMatchObject({ toInvite: 1 });
	const logged = "log.event where subject_id = $1 and action = $2";
	expect(await count(owner, logged, [operationId, "operation.mail_stopped"])).toBe(1);
	expect(await count(owner, logged, [operationId, "operation.mail_resumed"])).toBe(1);
});

test("stopping in the settings stops the mail that a link would have stopped", async () => {
	const { mailingId, operationId } = await inviteGrower(owner, iowa);
	await asGrower(operationId, async (trx) => {
		const viewer = growerOf(operationId);
		const own = await findOwnSettings(trx, viewer, operationId);
		return saveOwnSettings(trx, viewer, operationId, { ...own!.settings, mailWanted: false });
	});
	expect(await scopedTransaction({ kind: "network" }, (trx) => findMailWish(trx, operationId))).toMatchObject({
		mailWanted: false,
	});
	await sendMail({ mailingId });
	expect(mailServer.received).toEqual([]);
});

test("who has left is told the same as with a token that never was", async () => {
	const operationId = await addOperation(owner, { state: "19", status: "left" });
	expect(await scopedTransaction({ kind: "network" }, (trx) => findMailWish(trx, operationId))).toBeUndefined();
	expect(await wish(operationId, true)).toBe("not_found");
	expect(await count(owner, "directory.operation where operation_id = $1 and status = 'left'", [operationId])).toBe(1);
});
