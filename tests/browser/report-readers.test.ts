import { spawnSync } from "node:child_process";
import { setTimeout as pause } from "node:timers/promises";
import type { Browser } from "playwright-core";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { decideReport } from "#app/jobs/decide-report.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import { addRelease } from "#tests/database/publish-fixture.ts";
import { addPerson, asDesk, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser, openPage } from "#tests/helpers/browser.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let owner: Client;
let browser: Browser;
let slug: string;
let draftSlug: string;
let reportId: string;

const words = (text: string, es = text) => ({ en: text, es });
const network = { measure: "crop_loss", crop: "apple", area: "network" };
const content = {
	title: words("Loss after harvest", "Pérdida después de la cosecha"),
	summary: words("Growers lost [[crop_loss|apple|network]].", "Se perdió [[crop_loss|apple|network]]."),
	blocks: [
		{ id: "b1", type: "heading" as const, text: words("What happened", "Qué pasó") },
		{
			id: "b2",
			type: "text" as const,
			text: words("In **Johnson** [[crop_loss|apple|19103]], in Linn [[crop_loss|apple|19113]].", "En Johnson."),
		},
		{ id: "b3", type: "chart" as const, chart: "areas" as const, ...network, kind: "district" as const },
		{ id: "b4", type: "map" as const, measure: "crop_loss", crop: "apple" },
		{ id: "b5", type: "table" as const, measure: "crop_loss", crop: "apple", kind: "county" as const },
	],
};

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	useDatabase(stack.database, { BASE_URL: stack.baseUrl });
	owner = await connectOwner(stack.database.ownerUrl);
	const release = await addRelease(owner);
	const author = await addPerson(owner, "Iowa's associate", []);
	const coordinator = {
		...(await addPerson(owner, "The coordinator", [])),
		role: "coordinator",
	} as unknown as Coordinator;
	[reportId] = await handIn(author, release.releaseId);
	const [draftId] = await handIn(author, release.releaseId);
	const report = await asDesk(author, (trx) => findReport(trx, author, reportId));
	const draft = await asDesk(author, (trx) => findReport(trx, author, draftId));
	[slug, draftSlug] = [report?.slug ?? "", draft?.slug ?? ""];
	await subscribe();
	await asDesk(author, (trx) => decideReport(trx, coordinator, reportId, { intent: "publish" }, new Date()));
});
afterAll(async () => {
	await browser.close();
	await owner.end();
	await stack[Symbol.asyncDispose]();
});

async function handIn(author: Associate, releaseId: string): Promise<[string]> {
	const id = await asDesk(author, (trx) => startReport(trx, author, releaseId, { en: () => "Loss", es: () => "Loss" }));
	if (!id) throw new Error("the release was not found");
	await asDesk(author, (trx) => saveReport(trx, author, id, 1, content));
	await asDesk(author, (trx) => submitReport(trx, author, id));
	return [id];
}

type Message = { to: string[]; text: string; headers: Record<string, string> };

/** The first mail that fits, as soon as it is there. */
async function mailWith(wanted: (message: Message) => boolean): Promise<Message> {
	for (let attempt = 0; attempt < 200; attempt += 1) {
		const messages = (await (await fetch(`${stack.inboxUrl}/messages.json`)).json()) as Message[];
		const found = messages.find(wanted);
		if (found) return found;
		await pause(200);
	}
	throw new Error(`no such mail came\n${stack.output()}`);
}

/** By the pages themselves, as somebody without scripts does it. */
async function subscribe(): Promise<void> {
	const visitor = httpVisitor(stack.baseUrl);
	const wrong = await visitor.post("/subscribe", { email: "nobody", language: "en" });
	expect([wrong.status, wrong.text.includes('value="nobody"')]).toEqual([400, true]);
	const sent = await visitor.post("/subscribe", { email: "ana@quailbend.example", language: "en" });
	expect(sent.status).toBe(200);
	const { text } = await mailWith(({ text: body }) => body.includes("/subscribe/"));
	const link = /https?:\S+\/subscribe\/[\w-]{64}/.exec(text)?.[0] ?? "";
	expect((await visitor.get(link)).status).toBe(200);
	const { rows } = await owner.query("select 1 from readership.subscriber");
	expect(rows).toHaveLength(0); // opening the link confirms nothing
	expect((await visitor.post(link, {})).status).toBe(200);
}

const subscribers = async () => (await owner.query("select 1 from readership.subscriber")).rowCount;

async function pdfIn(language: string): Promise<Buffer> {
	for (let attempt = 0; attempt < 300; attempt += 1) {
		const answer = await fetch(`${stack.baseUrl}/reports/${slug}/1-${language}.pdf`);
		if (answer.ok) return Buffer.from(await answer.arrayBuffer());
		await pause(200);
	}
	throw new Error(`no PDF was made\n${stack.output()}`);
}

test("the page tells the release's figures, the feed and its linked data too, and nothing of a draft is there", async () => {
	const visitor = httpVisitor(stack.baseUrl);
	const page = await visitor.get(`/reports/${slug}`);
	// The release holds 41 (37 to 45) for the network and 38 (22 to 54), to be used with care, for Johnson.
	expect(page.text).toContain("41% (likely 37 to 45%)");
	expect(page.text).toContain("38% (likely 22 to 54%; use with care)");
	expect(page.text).toContain("a figure that is withheld");
	const described = /<script type="application\/ld\+json">(.*?)<\/script>/.exec(page.text)?.[1] ?? "";
	expect(JSON.parse(described)).toMatchObject({
		"@type": "Report",
		headline: "Loss after harvest",
		abstract: "Growers lost 41% (likely 37 to 45%).",
		inLanguage: "en",
		version: "1",
	});
	const feed = await visitor.get("/reports.atom?language=es");
	expect(feed.text).toMatch(/xml:lang="es"[\s\S]*<title>Pérdida después de la cosecha<\/title>[\s\S]*41\s?%/);
	for (const address of [`/reports/${draftSlug}`, `/reports/${draftSlug}/1-en.pdf`])
		expect((await visitor.get(address)).status).toBe(404);
	expect((await visitor.get("/reports")).text).not.toContain(draftSlug);
	expect(feed.text).not.toContain(`/reports/${draftSlug}<`);
});

test("the PDF is tagged: language, title, headings, table headers and an alternative for each drawing", async () => {
	for (const [language, heading] of [
		["en", "Dot chart: "],
		["es", "de puntos: "],
	] as const) {
		const pdf = await pdfIn(language);
		const source = pdf.toString("latin1");
		expect(source).toContain("/Marked true");
		expect(source).toContain(`/Lang (${language})`);
		const count = (role: string) => source.split(`/S /${role}\n`).length - 1;
		expect([count("H1"), count("H2") > 1, count("Table"), count("TH") > 5]).toEqual([1, true, 2, true]);
		// Alternatives with letters beyond Latin are written in hexadecimal.
		const alternatives = [...source.matchAll(/\/Alt (?:\((.*?)\)\n|<([0-9A-Fa-f]+)>)/g)].map(([, plain, coded]) =>
			coded ? Buffer.from(coded, "hex").swap16().toString("utf16le") : (plain ?? ""),
		);
		expect(alternatives.length).toBeGreaterThanOrEqual(2);
		expect(alternatives.some((text) => text.includes(heading))).toBe(true);
		expect(pdf.length).toBeLessThan(1_500_000);
	}
});

test("every figure of the PDF is the page's", async () => {
	const pdf = await pdfIn("en");
	const text = spawnSync("pdftotext", ["-layout", "-", "-"], { input: pdf }).stdout.toString().replaceAll(/\s+/g, " ");
	for (const figure of ["41% (likely 37 to 45%)", "38% (likely 22 to 54%; use with care)", "52%"])
		expect(text).toContain(figure);
});

test("the report's mail tells the same figures, and one post of a mail program erases the address", async () => {
	await using app = await connectOwner(stack.database.appUrl);
	await app.query(
		"select graphile_worker.reschedule_jobs(array(select id from graphile_worker.jobs where task_identifier = 'mail_report'), now())",
	);
	const mail = await mailWith(({ text }) => text.includes(`/reports/${slug}`));
	expect(mail.text).toContain("Growers lost 41% (likely 37 to 45%).");
	const address = /<(.*)>/.exec(mail.headers["list-unsubscribe"] ?? "")?.[1] ?? "";
	expect(mail.headers["list-unsubscribe-post"]).toBe("List-Unsubscribe=One-Click");
	expect([(await fetch(address)).status, await subscribers()]).toEqual([200, 1]);
	const post = {
		method: "POST",
		redirect: "error",
		body: new URLSearchParams({ "List-Unsubscribe": "One-Click" }),
	} as const;
	expect([(await fetch(address, post)).status, await subscribers()]).toEqual([200, 0]);
	expect((await fetch(address, post)).status).toBe(200);
});

test("who subscribes again chooses anew, and is answered in the language of the mail", async () => {
	const visitor = httpVisitor(stack.baseUrl);
	const ask = async (language: string, heading: string, crops: string) => {
		await visitor.post("/subscribe", { email: `bo@quailbend.example`, language, crops });
		const { text } = await mailWith(
			({ to, text: body }) => to.includes("bo@quailbend.example") && body.includes(heading),
		);
		return (await visitor.post(/https?:\S+\/subscribe\/[\w-]{64}/.exec(text)?.[0] ?? "", {})).text;
	};
	expect(await ask("es", "oprima", "plum")).toContain("Listo: recibirá los informes");
	expect(await ask("en", "press the button", "apple")).toContain("Done: reports will come");
	const { rows } = await owner.query("select language, crop_keys from readership.subscriber");
	expect(rows).toEqual([{ language: "en", crop_keys: ["apple"] }]);
});

test("the map prints on one sheet and its table on the next", async () => {
	const page = await openPage(browser);
	await page.goto(`${stack.baseUrl}/map?measure=crop_loss&crop=apple`);
	const pdf = await page.pdf({ format: "Letter" });
	expect(pdf.toString("latin1").match(/\/Type \/Page\n/g)).toHaveLength(2);
});

test("report and subscription meet WCAG by axe, on a phone too, and the page needs no sideways scrolling", async () => {
	const page = await openPage(browser, { viewport: { width: 375, height: 740 } });
	for (const path of [`/reports/${slug}`, "/reports", "/subscribe"]) {
		await page.goto(stack.baseUrl + path);
		expect(await axeFindings(page)).toEqual([]);
		expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(375);
	}
	expect(page.complaints).toEqual([]);
});
