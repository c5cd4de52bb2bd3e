import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { findLink } from "#app/collect/personal-link.server.ts";
import { sendMail } from "#app/jobs/send-mail.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { findMailingRow, inviteGrower, startMailServer, tokenIn } from "./mail-fixture.ts";
import {
	addPerson,
	answerFor,
	asDesk,
	connectOwner,
	count,
	loadPlaces,
	type NewOperation,
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

const invitedGrower = (operation: Partial<NewOperation> = {}) => inviteGrower(owner, iowa, operation);
const mailingOf = (mailingId: string) => findMailingRow(owner, mailingId);
const linkOf = (token: string) => scopedTransaction({ kind: "network" }, (trx) => findLink(trx, token));

test("an invitation carries a link that opens this operation's answers, with headers that name a machine as sender", async () => {
	const { mailingId, operationId, surveyId } = await invitedGrower();
	await sendMail({ mailingId });
	const [mail] = mailServer.received;
	expect(mail?.to).toMatchObject({ value: [{ name: "Ada Quill", address: "ada@quailbend.example" }] });
	expect(mail?.from?.value).toEqual([{ name: "Four Rivers Fruit Network", address: "survey@fourrivers.example" }]);
	expect(mail?.messageId).toBe(`<${mailingId}@survey.example>`);
	expect(mail?.headers.get("auto-submitted")).toBe("auto-generated");
	expect(mail?.headers.get("content-language")).toBe("en");
	expect(await linkOf(tokenIn(mail!))).toMatchObject({ operationId, surveyId });
	expect(mail?.html).toContain(`https://survey.example/r/${tokenIn(mail!)}`);
	const row = await mailingOf(mailingId);
	expect(row.sent_at).toBeInstanceOf(Date);
	expect(row.message_id).toBe(mail?.messageId);
	// The token is in the mail and nowhere in the database.
	const kept = await owner.query("select * from collect.personal_link where mailing_id = $1", [mailingId]);
	expect(JSON.stringify(kept.rows)).not.toContain(tokenIn(mail!));
});

test("a job that runs twice, also at the same moment, sends one mail", async () => {
	const { mailingId } = await invitedGrower();
	await Promise.all([sendMail({ mailingId }), sendMail({ mailingId })]);
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(1);
});

test("a grower who reads Spanish is written to in Spanish, with the survey's Spanish title", async () => {
	const { mailingId } = await invitedGrower({ language: "es", contact: "Rogelio Peñalba", name: "Huerta Peñalba" });
	await sendMail({ mailingId });
	const [mail] = mailServer.received;
	expect(mail?.subject).toBe("Después de la cosecha, temporada 2031: ¿cómo le fue a Huerta Peñalba?");
	expect(mail?.text).toContain("Hola, Rogelio Peñalba:");
	expect(mail?.headers.get("content-language")).toBe("es");
	expect(mail?.html).toContain('<html lang="es">');
	expect(mail?.text).not.toMatch(/\{\{|invitation\./);
	// The closing time on the operation's clock, with the zone said.
	expect(mail?.text).toMatch(/hasta el \d+ de \p{L}+ de \d{4} a las 5:00\sp\.m\. (CST|CDT)\./u);
});

test("a name can neither add a header nor a mark-up to the mail", async () => {
	const { mailingId } = await invitedGrower({
		name: "Bend <script>alert(1)</script> & Sons\r\nBcc: spy@elsewhere.example",
		contact: 'Ada "Q"\r\nBcc: spy@elsewhere.example',
	});
	await sendMail({ mailingId });
	const [mail] = mailServer.received;
	expect(mail?.headers.has("bcc")).toBe(false);
	expect(mail?.subject).toContain("Sons Bcc: spy@elsewhere.example");
	expect(mail?.html).toContain("Bend &lt;script&gt;alert(1)&lt;/script&gt; &amp; Sons");
	expect(mail?.html).not.toContain("<script>");
	expect(mail?.to).toMatchObject({ value: [expect.anything()] });
});

test("an answer of 451 is tried again: the next try sends, and links of both tries work", async () => {
	const { mailingId } = await invitedGrower();
	mailServer.trouble = { at: "data", code: 451 };
	await expect(sendMail({ mailingId })).rejects.toThrow();
	expect(await mailingOf(mailingId)).toMatchObject({ sent_at: null, failed_at: null, disposition: "not_reached" });
	mailServer.trouble = null;
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(1);
	expect(await linkOf(tokenIn(mailServer.received[0]!))).toBeDefined();
	expect(await count(owner, "collect.personal_link where mailing_id = $1 and replaced_at is null", [mailingId])).toBe(
		2,
	);
});

test("an address that the server refuses with 550 is given up and its operation marked undeliverable", async () => {
	const { mailingId } = await invitedGrower();
	mailServer.trouble = { at: "to", code: 550 };
	await sendMail({ mailingId });
	expect(await mailingOf(mailingId)).toMatchObject({
		sent_at: null,
		failure: "returned",
		disposition: "undeliverable",
	});
	mailServer.trouble = null;
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(0);
});

test("a 553 to our own sender is no fault of the grower: it is tried again", async () => {
	const { mailingId } = await invitedGrower();
	mailServer.trouble = { at: "from", code: 553 };
	await expect(sendMail({ mailingId })).rejects.toThrow();
	expect(await mailingOf(mailingId)).toMatchObject({ failed_at: null, disposition: "not_reached" });
});

test("who has answered meanwhile gets no invitation any more", async () => {
	const { mailingId, surveyId, operationId } = await invitedGrower();
	await answerFor(owner, surveyId, operationId);
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(0);
	expect(await mailingOf(mailingId)).toMatchObject({ sent_at: null, failure: "answered", disposition: "complete" });
});

test("an older invitation still in the queue is dropped when a new link was asked for", async () => {
	const { mailingId, surveyId, operationId } = await invitedGrower();
	await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, 2));
	await sendMail({ mailingId });
	expect(mailServer.received).toHaveLength(0);
	const { rows } = await owner.query("select mailing_id from collect.mailing where survey_id = $1 and wave = 2", [
		surveyId,
	]);
	await sendMail({ mailingId: rows[0].mailing_id });
	expect(await linkOf(tokenIn(mailServer.received[0]!))).toMatchObject({ operationId });
	expect(await mailingOf(mailingId)).toMatchObject({ failure: "replaced" });
});

test("a receipt goes out after answering, in the language of the answers, with the code and no personal link", async () => {
	const { surveyId, operationId } = await invitedGrower();
	const code = await answerFor(owner, surveyId, operationId, "es");
	const { rows } = await owner.query(
		"insert into collect.mailing (survey_id, operation_id, kind) values ($1, $2, 'receipt') returning mailing_id",
		[surveyId, operationId],
	);
	await sendMail({ mailingId: rows[0].mailing_id });
	const [mail] = mailServer.received;
	expect(mail?.subject).toContain(`recibo ${code}`);
	expect(mail?.text).toContain(code);
	expect(mail?.text).not.toContain("/r/");
});

test("a closed survey sends no invitation, and an unknown mailing nothing at all", async () => {
	const { mailingId, surveyId } = await invitedGrower();
	await owner.query("update collect.survey set closed_at = now() where survey_id = $1", [surveyId]);
	await sendMail({ mailingId });
	await sendMail({ mailingId: "00000000-0000-4000-8000-000000000000" });
	expect(mailServer.received).toHaveLength(0);
	expect(await mailingOf(mailingId)).toMatchObject({ failure: "survey_closed" });
});
