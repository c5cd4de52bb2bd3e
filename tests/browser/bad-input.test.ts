import { request } from "node:http";
import { text as streamText } from "node:stream/consumers";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink, replacePersonalLinks } from "#app/collect/personal-link.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { addPlanting, addSurvey, closeLongAgo } from "#tests/database/answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, count, useDatabase } from "#tests/database/surveys-fixture.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let owner: Client;
let associate: Associate;
const name = 'Quail <script>alert(1)</script> & "Bend" Orchard';

beforeAll(async () => {
	stack = await startStack();
	useDatabase(stack.database);
	owner = await connectOwner(stack.database.ownerUrl);
	associate = await addPerson(owner, "Del Fenwick", ["19"]);
});
afterAll(async () => {
	await owner?.end();
	await stack?.[Symbol.asyncDispose]();
});

/** A grower asked by an open survey, with the address of a link to it. */
async function asked(more: { expiresAt?: Date } = {}) {
	const operationId = await addOperation(owner, { state: "19", name });
	await addPlanting(owner, operationId, { crop: "plum" });
	const surveyId = await addSurvey(associate);
	const expiresAt = more.expiresAt ?? new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) =>
		createPersonalLink(trx, { surveyId, operationId, expiresAt }),
	);
	return { surveyId, operationId, token, link: `/r/${token}`, address: `/answer/${surveyId}/${operationId}` };
}

/** Somebody who has opened the link and begun; `first` is the address of the first planting. */
async function begun() {
	const place = await asked();
	const visitor = httpVisitor(stack.baseUrl);
	await visitor.post(place.link, {});
	const { location: first } = await visitor.post(place.address, {});
	return { ...place, visitor, first };
}

/** A page's words, without what differs from one request to the next. */
const wordsOf = (html: string) =>
	html
		.replace(/<script[\s\S]*?<\/script>/g, "")
		.replace(/nonce="[^"]*"/g, "")
		.replaceAll(/\/r\/[\w-]+/g, "/r/");

test("a wrong, a cut, an expired, a replaced and a closed survey's link are answered alike", async () => {
	const expired = await asked({ expiresAt: new Date(Date.now() - 1000) });
	const replaced = await asked();
	await scopedTransaction({ kind: "network" }, (trx) => replacePersonalLinks(trx, replaced));
	const closed = await asked();
	expect(await asDesk(associate, (trx) => closeSurvey(trx, associate, closed.surveyId))).toBe("closed");
	const good = await asked();
	const links = [
		`/r/${"x".repeat(43)}`,
		"/r/short",
		`${good.link}x`,
		`${good.link.slice(0, -1)}${good.link.endsWith("A") ? "B" : "A"}`,
		expired.link,
		replaced.link,
		closed.link,
	];
	const visitor = httpVisitor(stack.baseUrl);
	const answers = await Promise.all(links.flatMap((link) => [visitor.get(link), visitor.post(link, {})]));
	expect(answers.map(({ status }) => status)).toEqual(answers.map(() => 404));
	const [first, ...others] = answers.map(({ text }) => wordsOf(text));
	expect(first).toContain("This link does not open a survey");
	for (const other of others) expect(other).toBe(first);
	expect((await visitor.get(good.link)).status).toBe(200);
});

test("who tries too many wrong links has to wait, and whoever has a link that works does not", async () => {
	const { link } = await asked();
	const visitor = httpVisitor(stack.baseUrl, "en", { "x-forwarded-for": "203.0.113.7" });
	const statuses = [];
	for (let tried = 0; tried < 62; tried += 1) statuses.push((await visitor.get(`/r/${"y".repeat(43)}`)).status);
	expect(statuses).toEqual([...Array<number>(60).fill(404), 429, 429]);
	expect((await visitor.get(link)).status).toBe(200);
	const neighbor = httpVisitor(stack.baseUrl, "en", { "x-forwarded-for": "203.0.113.8" });
	expect((await neighbor.get(`/r/${"y".repeat(43)}`)).status).toBe(404);
});

test("opening a link changes nothing, and shows no whole name, contact or answer", async () => {
	const { link, surveyId, operationId } = await asked();
	const rows = () =>
		owner.query(
			`select (select json_agg(l) from collect.personal_link l where survey_id = $1) as links,
				(select json_agg(r) from collect.response r where survey_id = $1) as responses,
				(select count(*) from auth.session) as sessions,
				(select disposition from collect.frame_operation where survey_id = $1 and operation_id = $2)`,
			[surveyId, operationId],
		);
	const before = (await rows()).rows;
	const { status, text } = await httpVisitor(stack.baseUrl).get(link);
	expect(status).toBe(200);
	expect((await rows()).rows).toEqual(before);
	expect(text).not.toContain("Quail");
	expect(text).not.toContain("ada@quailbend.example");
	expect(text).not.toContain(operationId);
});

test("a link's page is in the language the grower is known to read, until the visitor chooses", async () => {
	const { link, operationId } = await asked();
	await owner.query("update directory.operation set language = 'es' where operation_id = $1", [operationId]);
	const visitor = httpVisitor(stack.baseUrl, "en");
	const { status, location } = await visitor.get(link);
	expect(status).toBe(302);
	expect((await visitor.get(location)).text).toContain("Abrir mi encuesta");
	const withoutCookies = httpVisitor(stack.baseUrl, "en");
	expect((await withoutCookies.get(new URL(location).pathname + new URL(location).search)).status).toBe(200);
	await visitor.post("/language", { language: "en", returnTo: link });
	expect((await visitor.get(link)).text).toContain("Open my survey");
});

test("without the session a link opened, the survey's address opens nothing", async () => {
	const { address } = await begun();
	const stranger = httpVisitor(stack.baseUrl, "es");
	const { status, text } = await stranger.get(address);
	expect(status).toBe(401);
	expect(text).toContain("Abra su enlace otra vez");
	expect((await stranger.post(`${address}/review`, {})).status).toBe(401);
});

test("another operation's or survey's id is not found, by reading and by writing", async () => {
	const mine = await begun();
	const theirs = await begun();
	const forged = [
		theirs.address,
		`/answer/${mine.surveyId}/${theirs.operationId}`,
		`/answer/${theirs.surveyId}/${mine.operationId}`,
		`/answer/${mine.surveyId}/none`,
	];
	for (const address of forged) {
		for (const page of [
			"",
			"/review",
			"/receipt",
			"/ask/causes",
			new URL(theirs.first).pathname.slice(address.length),
		]) {
			const { status, text } = await mine.visitor.get(address + page);
			expect(`${status} ${address + page}`).toBe(`404 ${address + page}`);
			expect(text).not.toContain("Quail");
		}
		expect((await mine.visitor.post(`${address}/review`, {})).status).toBe(404);
	}
	const otherPlanting = `${mine.address}/ask/${theirs.first.split("/").at(-1)}`;
	expect((await mine.visitor.post(otherPlanting, { bearing_trees: "7" })).status).toBe(404);
	expect(await count(owner, "collect.answer where value = '7'")).toBe(0);
});

test("what is wrong comes back beside its field with what was typed, and nothing is kept", async () => {
	const { visitor, first, surveyId } = await begun();
	const pasted = "12 500\u00a0bushels <img src=x onerror=alert(1)>";
	const { status, text } = await visitor.post(first, {
		bearing_trees: "-4",
		normal_crop: "12,5 bu",
		normal_crop_unit: "bu",
		harvested: pasted,
		harvested_unit: "lb",
	});
	expect(status).toBe(400);
	expect(text).toContain("<title>To fix: ");
	for (const typed of [
		'value="-4"',
		'value="12,5 bu"',
		'value="12 500\u00a0bushels &lt;img src=x onerror=alert(1)&gt;"',
	])
		expect(text).toContain(typed);
	expect(text).toMatch(/<option value="bu" selected="">/);
	expect(text.match(/id="problem-/g)).toHaveLength(3);
	expect(text).not.toContain("<img src=x");
	const { rows } = await owner.query(
		"select from collect.answer a join collect.response r using (response_id) where r.survey_id = $1",
		[surveyId],
	);
	expect(rows).toHaveLength(0);
	const missing = await visitor.post(first, {});
	expect(missing.status).toBe(400);
	expect(missing.text.match(/id="problem-/g)).toHaveLength(3);
	const huge = await visitor.post(first, { bearing_trees: "9".repeat(30), normal_crop: "1e9", harvested: "0" });
	expect(huge.status).toBe(400);
});

test("two megabytes of text come back beside the box, and still more is refused in words", async () => {
	const { visitor, address } = await begun();
	const text = "Peach ".repeat(350_000);
	const answer = await visitor.post(`${address}/ask/next_year`, { comment: text });
	expect(answer.status).toBe(400);
	expect(answer.text).toContain("5,000 characters or fewer");
	expect(answer.text).toContain(text.trimEnd());
	const tooMuch = await visitor.post(`${address}/ask/next_year`, { comment: "x".repeat(8_100_000) });
	expect(tooMuch.status).toBe(413);
	expect(tooMuch.text).toContain("more text than this page can take");
});

test("a screen sent when the link's session has ended comes back whole, and is sent once the link is open again", async () => {
	const { visitor, address, link } = await begun();
	await owner.query("update auth.session set seen_at = now() - interval '13 hours'");
	const { status, text } = await visitor.post(`${address}/ask/next_year`, { comment: "Typed too late" });
	expect(status).toBe(401);
	expect(text).toContain("your last screen was not saved");
	expect(text).toContain('name="comment" value="Typed too late"');
	const again = /action="([^"]+sent-by=[^"]+)"/.exec(text)?.[1] ?? "";
	const kept = () => count(owner, "collect.answer where value = '\"Typed too late\"'");
	expect((await visitor.post(again, { comment: "Typed too late" })).status).toBe(401);
	expect(await kept()).toBe(0);
	await visitor.post(link, {});
	expect((await visitor.post(again, { comment: "Typed too late" })).status).toBe(303);
	expect(await kept()).toBe(1);
});

test("names and notes with markup are shown as they were typed", async () => {
	const { visitor, address } = await begun();
	const start = await visitor.get(address);
	expect(start.text).toContain("Quail &lt;script&gt;alert(1)&lt;/script&gt; &amp; &quot;Bend&quot; Orchard");
	expect(start.text).not.toContain("<script>alert(1)");
	await visitor.post(`${address}/ask/next_year`, { comment: "<b>cold</b> </script><script>alert(2)</script>" });
	const review = await visitor.get(`${address}/review`);
	expect(review.text).toContain("&lt;b&gt;cold&lt;/b&gt;");
	expect(review.text).not.toContain("<script>alert(2)");
});

test("a survey that closes while it is answered takes what comes as late, and says so", async () => {
	const { visitor, address, surveyId, first } = await begun();
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
	const start = await visitor.get(address);
	expect(start.text).toContain("This survey has closed");
	expect(start.text).not.toContain("change your answers until");
	const screen = await visitor.get(first);
	expect(screen.text).toContain("This survey has closed");
	const planting = { bearing_trees: "40", normal_crop: "800 lb", harvested: "800 lb" };
	let next = first;
	while (next.includes("/planting-")) next = (await visitor.post(next, planting)).location;
	expect((await visitor.get(`${address}/review`)).text).toContain("What you send is kept as late");
	const sent = await visitor.post(`${address}/review`, {});
	expect(sent.location).toMatch(/\/receipt$/);
	const receipt = await visitor.get(sent.location);
	expect(receipt.text).toContain("Your answers arrived after the closing");
	expect(receipt.text).not.toContain("You can change your answers until");
});

test("two weeks after the closing a survey takes nothing, says so, and keeps what was saved", async () => {
	const { visitor, address, surveyId } = await begun();
	await visitor.post(`${address}/ask/next_year`, { comment: "Before the closing" });
	await closeLongAgo(owner, surveyId);
	for (const answer of [
		await visitor.get(address),
		await visitor.get(`${address}/review`),
		await visitor.post(`${address}/ask/next_year`, { comment: "After it" }),
		await visitor.post(`${address}/review`, {}),
	]) {
		expect(answer.status).toBe(410);
		expect(answer.text).toContain("This survey is closed");
	}
	expect(await count(owner, "collect.answer where value = '\"Before the closing\"'")).toBe(1);
	expect(await count(owner, "collect.answer where value = '\"After it\"'")).toBe(0);
});

test("a second tap on the same answers gives the same receipt, and one mail", async () => {
	const { visitor, address, first, surveyId } = await begun();
	const planting = {
		bearing_trees: "40",
		normal_crop: "10",
		normal_crop_unit: "bu",
		harvested: "10",
		harvested_unit: "bu",
	};
	let next = first;
	while (next.includes("/planting-")) next = (await visitor.post(next, planting)).location;
	const taps = await Promise.all([1, 2, 3].map(() => visitor.post(`${address}/review`, {})));
	expect(taps.map(({ status, location }) => [status, new URL(location).pathname])).toEqual(
		taps.map(() => [303, `${address}/receipt`]),
	);
	expect(await count(owner, "collect.response where survey_id = $1", [surveyId])).toBe(1);
	expect(await count(owner, "collect.mailing where survey_id = $1 and kind = 'receipt'", [surveyId])).toBe(1);
});

test("a method that no page takes is refused in words with those it does, and a form that is none lacks its fields", async () => {
	const { hostname, port } = new URL(stack.baseUrl);
	const ask = (method: string, path: string) =>
		new Promise<{ line: string; text: string }>((resolve, reject) => {
			// Node's fetch refuses to send some of these.
			const sent = request({ hostname, port, method, path, agent: false }, async (answer) =>
				resolve({ line: `${answer.statusCode} ${answer.headers.allow}`, text: await streamText(answer) }),
			);
			sent.on("error", reject).end();
		});
	for (const method of ["TRACE", "PROPFIND", "OPTIONS", "PATCH"])
		for (const path of ["/data", "/sign-out", "/nowhere", "/map/counties.json"]) {
			const { line, text } = await ask(method, path);
			expect(`${method} ${path} ${line}`).toBe(`${method} ${path} 405 GET, HEAD, POST`);
			if (path === "/data") expect(text).toContain("This page is not asked for in that way");
		}
	expect((await ask("POST", "/data")).line).toBe("405 GET, HEAD");
	expect((await ask("POST", "/subscribe")).line).toBe("400 undefined");
});
