import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { decideReport } from "#app/jobs/decide-report.server.ts";
import {
	confirmSubscription,
	mailReport,
	mailSubscriber,
	sweepSubscriptions,
	unsubscribeAddressOf,
} from "#app/jobs/mail-report.server.ts";
import { idOfToken, tokenOf } from "#app/mail/id-token.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import type { Subscription } from "#app/publish/readership/choice.ts";
import { addRequest, confirmRequest, removeSubscriber } from "#app/publish/readership/subscribers.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { startMailServer } from "./mail-fixture.ts";
import { addRelease, secret } from "./publish-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let author: Associate;
let coordinator: Coordinator;
let mailServer: Awaited<ReturnType<typeof startMailServer>>;
let release: Awaited<ReturnType<typeof addRelease>>;

beforeAll(async () => {
	mailServer = await startMailServer();
	database = await createTestDatabase();
	useDatabase(database, { SMTP_URL: mailServer.url });
	owner = await connectOwner(database.ownerUrl);
	release = await addRelease(owner);
	author = await addPerson(owner, "Iowa's associate", []);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await mailServer.stop();
	await owner.end();
	await database.drop();
});
beforeEach(async () => {
	mailServer.reset();
	await owner.query("delete from readership.subscriber");
	await owner.query("delete from readership.request");
});

const none = <T>(work: Parameters<typeof scopedTransaction<T>>[1]) => scopedTransaction({ kind: "none" }, work);
const ask = (choice: Partial<Subscription> = {}) =>
	none((trx) => addRequest(trx, { email: "ana@orchard.example", language: "en", crops: [], states: [], ...choice }));

/** Somebody who confirmed. */
async function subscribe(choice: Partial<Subscription> = {}): Promise<string> {
	const requestId = await ask(choice);
	await none((trx) => confirmRequest(trx, requestId));
	const { rows } = await owner.query("select subscriber_id from readership.subscriber where email = $1", [
		choice.email ?? "ana@orchard.example",
	]);
	return rows[0].subscriber_id;
}

/** A published report whose summary tells a shown figure, a withheld one, and last season's. */
async function publish(): Promise<string> {
	const reportId = await asDesk(author, (trx) =>
		startReport(trx, author, release.releaseId, { en: (key) => key, es: (key) => key }),
	);
	if (!reportId) throw new Error("the release was not found");
	const summary = "Lost [[crop_loss|apple|network]]; Linn [[crop_loss|apple|19113]].";
	const content = {
		title: { en: "After [[crop_loss|apple|19103]]", es: "Después de [[crop_loss|apple|19103]]" },
		summary: { en: summary, es: `Se perdió: ${summary}` },
		blocks: [{ id: "b1", type: "figure" as const, measure: "crop_loss", crop: "apple", area: "IA-3" }],
	};
	await asDesk(author, (trx) => saveReport(trx, author, reportId, 1, content));
	await asDesk(author, (trx) => submitReport(trx, author, reportId));
	await asDesk(author, (trx) => decideReport(trx, coordinator, reportId, { intent: "publish" }, new Date()));
	return reportId;
}

/** Runs what the report's mail job queued. */
async function mailAll(reportId: string): Promise<string[]> {
	await mailReport({ reportId });
	const { rows } = await owner.query(
		"select subscriber_id from readership.mailing where report_id = $1 and sent_at is null and failed_as is null",
		[reportId],
	);
	for (const { subscriber_id: subscriberId } of rows) await mailSubscriber({ reportId, subscriberId });
	return mailServer.received.map(({ text }) => String(text));
}

test("a typed address gets one mail that asks, and counts for nothing before its button is pressed", async () => {
	const requestId = await ask({ language: "es" });
	await confirmSubscription({ requestId });
	expect(mailServer.received).toHaveLength(1);
	const text = String(mailServer.received[0]?.text);
	const token = /\/subscribe\/([A-Za-z0-9_-]{64})/.exec(text)?.[1] ?? "";
	expect(text).toContain("Alguien, seguramente usted");
	expect(idOfToken("confirm subscription", token)).toBe(requestId);
	expect(await count(owner, "readership.subscriber")).toBe(0);
	expect(await none((trx) => confirmRequest(trx, requestId))).toBe("confirmed");
	expect(await count(owner, "readership.subscriber where email = 'ana@orchard.example' and language = 'es'")).toBe(1);
	expect(await count(owner, "readership.request")).toBe(0);
	expect(await none((trx) => confirmRequest(trx, requestId))).toBe("not_found");
});

test("a token of one kind is none of another, and a changed one is none at all", async () => {
	const id = "0193b2d2-7a57-4e7c-9a39-5b1f6f0a7a11";
	const token = tokenOf("confirm subscription", id);
	expect(idOfToken("unsubscribe", token)).toBeUndefined();
	expect(idOfToken("confirm subscription", `${token.slice(0, -1)}${token.endsWith("A") ? "B" : "A"}`)).toBeUndefined();
	expect(idOfToken("confirm subscription", token)).toBe(id);
});

test("asking again for a known address changes nothing before that mail's button, and then only the choice", async () => {
	const subscriberId = await subscribe({ crops: ["apple"] });
	const requestId = await ask({ email: "ANA@orchard.example", language: "es", crops: ["plum"] });
	expect(await count(owner, "readership.subscriber where crop_keys = '{apple}'")).toBe(1);
	await none((trx) => confirmRequest(trx, requestId));
	expect(await count(owner, "readership.subscriber")).toBe(1);
	expect(
		await count(owner, "readership.subscriber where crop_keys = '{plum}' and subscriber_id = $1", [subscriberId]),
	).toBe(1);
});

test("requests that nobody confirmed are forgotten after two days, and their links confirm nothing", async () => {
	const requestId = await ask();
	await owner.query("update readership.request set requested_at = now() - interval '49 hours'");
	expect(await none((trx) => confirmRequest(trx, requestId))).toBe("not_found");
	expect(await count(owner, "readership.request")).toBe(1);
	await sweepSubscriptions();
	expect(await count(owner, "readership.request")).toBe(0);
});

test("a published report goes once to each who asked for such a one, every figure equal to the release's", async () => {
	await subscribe({ email: "all@orchard.example" });
	await subscribe({ email: "iowa@orchard.example", states: ["19"], crops: ["apple"], language: "es" });
	await subscribe({ email: "plum@orchard.example", crops: ["plum"] });
	await subscribe({ email: "wisconsin@orchard.example", states: ["55"] });
	const reportId = await publish();
	const texts = await mailAll(reportId);
	expect(mailServer.received.map(({ to }) => JSON.stringify(to)).join()).not.toMatch(/plum@|wisconsin@/);
	expect(texts).toHaveLength(2);
	const english = texts.find((text) => text.includes("Lost ") && !text.includes("Se perdió")) ?? "";
	const spanish = texts.find((text) => text.includes("Se perdió")) ?? "";
	// The release holds 41 (37 to 45) for the network, 52 (44 to 60) for IA-3, and nothing for Linn.
	expect(english).toContain("Lost 41% (likely 37 to 45%); Linn a figure that is withheld.");
	expect(english).toContain("52% (likely 44 to 60%)");
	expect(spanish).toMatch(/41\s?%/);
	for (const text of texts) {
		expect(text).not.toContain(String(secret));
		expect(text).toMatch(/\/unsubscribe\/[A-Za-z0-9_-]{64}/);
	}
	mailServer.reset();
	expect(await mailAll(reportId)).toEqual([]);
});

test("each report's mail is ended by one press (RFC 8058), and then nothing of the address is left", async () => {
	const subscriberId = await subscribe();
	const reportId = await publish();
	await mailAll(reportId);
	const mail = mailServer.received[0];
	const header = (name: string) => String(mail?.headers.get(name) ?? "");
	const raw = JSON.stringify([...(mail?.headers ?? [])]);
	expect(raw).toContain(unsubscribeAddressOf(subscriberId));
	expect(header("list-unsubscribe-post") || raw).toContain("One-Click");
	const token = unsubscribeAddressOf(subscriberId).split("/").at(-1) ?? "";
	expect(idOfToken("unsubscribe", token)).toBe(subscriberId);
	expect(await count(owner, "readership.mailing where subscriber_id = $1", [subscriberId])).toBe(1);
	await none((trx) => removeSubscriber(trx, subscriberId));
	await none((trx) => removeSubscriber(trx, subscriberId));
	expect(await count(owner, "readership.subscriber")).toBe(0);
	expect(await count(owner, "readership.mailing where subscriber_id = $1", [subscriberId])).toBe(0);
	mailServer.reset();
	expect(await mailAll(await publish())).toEqual([]);
});

test("a mail of which nobody knows whether it arrived is not sent again", async () => {
	const subscriberId = await subscribe();
	const reportId = await publish();
	await mailReport({ reportId });
	await owner.query("update readership.mailing set tried_at = now() where subscriber_id = $1", [subscriberId]);
	await mailSubscriber({ reportId, subscriberId });
	expect(mailServer.received).toHaveLength(0);
	expect(await count(owner, "readership.mailing where failed_as = 'uncertain'")).toBe(1);
});

test("the reader's role cannot even enter where addresses lie, and a draft is mailed to nobody", async () => {
	await subscribe();
	const draft = await asDesk(author, (trx) =>
		startReport(trx, author, release.releaseId, { en: (key) => key, es: (key) => key }),
	);
	expect((await asDesk(author, (trx) => findReport(trx, author, draft ?? "")))?.state).toBe("draft");
	expect(await mailAll(draft ?? "")).toEqual([]);
	await using reader = await connectOwner(database.readerUrl);
	for (const table of ["subscriber", "request", "mailing"])
		await expect(reader.query(`select 1 from readership.${table}`)).rejects.toThrow("permission denied for schema");
});
