import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { axeFindings, openBrowser, openPage, phone, signIn } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { answerByForms, answerByHand, answerByKeyboard } from "./chain/answering.ts";
import { addGrowers, growers, lossOf } from "./chain/orchards.ts";

let stack: Stack;
let browser: Browser;
type Visitor = Awaited<ReturnType<typeof openPage>>;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack({ coordinatorSubject: "demo-marit-osgood" }), openBrowser()]);
	await addGrowers(stack.database.ownerUrl);
});
afterAll(async () => {
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

test("from a grant to the released file: one survey goes the whole way", async () => {
	const people = {
		coordinator: await openPage(browser),
		associate: await openPage(browser),
		reader: await openPage(browser),
	};
	const { coordinator, associate, reader } = people;
	await signIn(associate, stack.baseUrl, "Del Fenwick");
	await signIn(coordinator, stack.baseUrl, "Marit Osgood");
	await grantIowa(coordinator, associate);

	const survey = await openAndInvite(associate);
	await anotherStateSeesNothing(coordinator, survey);
	await everybodyAnswers();
	await closeAndDraft(associate, survey);
	await approve(coordinator);

	const shown = await readMap(reader);
	await publishReport(associate, coordinator);
	await readReport(reader);
	const file = await takeFile();
	compareWithPage(file, shown);
	// Pages that were refused or sent back on purpose tell of it in the console.
	for (const [name, page] of Object.entries(people))
		expect(
			page.complaints.filter((line) => !/status of (400|403|404)/.test(line)),
			name,
		).toEqual([]);
}, 600_000);

async function grantIowa(coordinator: Visitor, associate: Visitor): Promise<void> {
	expect((await associate.goto(`${stack.baseUrl}/desk`))?.status()).toBe(403);
	await coordinator.goto(`${stack.baseUrl}/network`);
	await coordinator.selectOption("[name=personId]", { label: "Del Fenwick, del@fourrivers.example" });
	await coordinator.selectOption("[name=role]", "associate");
	await coordinator.selectOption("[name=stateFips]", "19");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByText("Associate, Iowa", { exact: true }).waitFor();
}

/** The coordinator has no state; with another one granted, Iowa's survey is still not there. */
async function anotherStateSeesNothing(coordinator: Visitor, survey: string): Promise<void> {
	await coordinator.selectOption("[name=personId]", { label: "Marit Osgood, marit@fourrivers.example" });
	await coordinator.selectOption("[name=stateFips]", "55");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByText("Associate, Wisconsin", { exact: true }).waitFor();
	expect((await coordinator.goto(survey))?.status()).toBe(404);
}

/** @returns the survey's page. */
async function openAndInvite(associate: Visitor): Promise<string> {
	await associate.goto(`${stack.baseUrl}/desk/surveys/new`);
	await associate.getByRole("button", { name: "Make the draft" }).click();
	await associate.getByRole("link", { name: "Enter closing day" }).waitFor();
	expect(await axeFindings(associate)).toEqual([]);
	await associate.fill("[name=closesOn]", new Date(Date.now() + 20 * 86_400_000).toISOString().slice(0, 10));
	await associate.getByRole("button", { name: "Make the draft" }).click();
	await associate.getByRole("button", { name: "Open the survey" }).click();
	await associate.getByRole("button", { name: "Open it" }).click();
	await associate.getByRole("button", { name: "Send invitations" }).click();
	await associate.getByRole("dialog").getByRole("button", { name: "Send", exact: true }).click();
	await associate.getByText(`${growers.length} e-mails are on their way.`).waitFor();
	return associate.url();
}

type Mail = { subject: string; text: string };
const mailsTo = async (address: string): Promise<Mail[]> =>
	(await (await fetch(`${stack.inboxUrl}/messages.json?to=${encodeURIComponent(address)}`)).json()) as Mail[];

async function linkOf(email: string): Promise<string> {
	await expect.poll(() => mailsTo(email), { timeout: 60_000 }).toHaveLength(1);
	const link = (await mailsTo(email))[0]?.text.match(/https?:\/\/\S+\/r\/[\w-]{43}/)?.[0];
	expect(link).toBeDefined();
	return link!;
}

/** The first on a phone, the second in Spanish, the third without scripts, the fourth by keyboard; the rest post the same forms. */
async function everybodyAnswers(): Promise<void> {
	const [first, second, third, fourth, ...others] = growers;
	const pages = [
		{ grower: first!, scripts: true, page: await openPage(browser, phone) },
		{ grower: second!, scripts: true, page: await openPage(browser, { ...phone, language: "es-US" }) },
		{ grower: third!, scripts: false, page: await openPage(browser, { ...phone, javaScriptEnabled: false }) },
	];
	for (const { grower, scripts, page } of pages) {
		const code = await answerByHand(page, await linkOf(grower.email), grower, { scripts });
		await expect.poll(() => mailsTo(grower.email), { timeout: 30_000 }).toHaveLength(2);
		expect((await mailsTo(grower.email)).some(({ subject }) => subject.includes(code))).toBe(true);
		// Without a 400 the bad number would not have come back; the browser tells of it in the console.
		expect(page.complaints.filter((line) => !line.includes("400"))).toEqual([]);
	}
	await answerByKeyboard(await openPage(browser), await linkOf(fourth!.email), fourth!);
	for (const grower of others) await answerByForms(await linkOf(grower.email), grower);
}

async function closeAndDraft(associate: Visitor, survey: string): Promise<void> {
	await associate.goto(survey);
	await associate.getByText(`of ${growers.length} answers in`).waitFor();
	await associate.getByRole("button", { name: "Close the survey" }).click();
	await associate.getByRole("button", { name: "Close it" }).click();
	await associate.getByText("The survey is closed.", { exact: false }).first().waitFor();
	await associate.goto(`${survey}/release`);
	await associate.getByRole("button", { name: "Draft the release" }).click();
	await associate.getByRole("button", { name: "Draft it", exact: true }).click();
	await associate.getByText("Audited, and waiting for a coordinator's approval").waitFor({ timeout: 120_000 });
	await associate.getByText("Passed: no withheld figure can be worked out").waitFor();
	expect(await axeFindings(associate)).toEqual([]);
}

async function approve(coordinator: Visitor): Promise<void> {
	await coordinator.goto(`${stack.baseUrl}/network/releases`);
	await coordinator.getByRole("link", { name: /After harvest/ }).click();
	await coordinator.getByRole("button", { name: "Publish at once" }).click();
	await coordinator.getByRole("dialog").getByRole("button", { name: "Publish", exact: true }).click();
	await coordinator.getByText("Release 1 is published.").waitFor();
}

type MapFigure = { areaKey: string; status: string; value?: number; lower?: number; upper?: number };

/** Reads the map as served, drawn and told. @returns its figures by area. */
async function readMap(reader: Visitor): Promise<Map<string, MapFigure>> {
	const figures = reader.waitForResponse((response) => response.url().includes("/map/figures/1/crop_loss/apple"));
	await reader.goto(`${stack.baseUrl}/map?measure=crop_loss&crop=apple&kind=county`);
	const { cells } = (await (await figures).json()) as { cells: MapFigure[] };
	const shown = new Map(cells.map((cell) => [cell.areaKey, cell]));
	const withheld = cells.filter((cell) => cell.status === "withheld");
	// Two growers are too few, and Louisa must not be had by subtraction from its district.
	expect(withheld.map((cell) => cell.areaKey)).toContain("19115");
	expect(withheld.length).toBeGreaterThan(1);
	for (const cell of withheld) expect([cell.value, cell.lower, cell.upper]).toEqual([undefined, undefined, undefined]);
	const counties = cells.filter((cell) => cell.status === "shown");
	expect(counties.length).toBeGreaterThan(0);
	// Everybody answered, so each shown figure is the plain sum of what the test's growers told, as published rounded.
	for (const cell of counties) expect(cell.value).toBe(Math.round(lossOf(cell.areaKey)));

	await reader.getByRole("application").waitFor();
	expect(await reader.locator("svg path.map-withheld").count()).toBe(withheld.length);
	const row = (name: string) => reader.locator("#table tr", { hasText: name });
	await row("Louisa").getByText("Withheld").waitFor();
	await row("Linn")
		.getByText(`${Math.round(lossOf("19113"))}%`)
		.first()
		.waitFor();
	await row("Louisa").getByRole("link").click();
	await reader.locator("output", { hasText: /Louisa.*[Ww]ithheld/ }).waitFor();
	expect(await axeFindings(reader)).toEqual([]);
	return shown;
}

async function publishReport(associate: Visitor, coordinator: Visitor): Promise<void> {
	await associate.goto(`${stack.baseUrl}/desk/reports`);
	await associate.getByRole("button", { name: "Start with a draft" }).click();
	await associate.getByRole("button", { name: "Save and hand in for approval" }).click();
	await associate.getByText("The report waits for a coordinator's approval.").waitFor();
	await coordinator.goto(`${stack.baseUrl}/network/reports`);
	await coordinator.getByRole("table").getByRole("link").first().click();
	await coordinator.getByRole("button", { name: "Publish now" }).first().click();
	await coordinator.getByRole("dialog").getByRole("button", { name: "Publish now" }).click();
	await coordinator.getByText("This report is published.").waitFor();
}

async function readReport(reader: Visitor): Promise<void> {
	await reader.goto(`${stack.baseUrl}/reports`);
	await reader.locator("main a[href^='/reports/']").first().click();
	await reader.locator("article").waitFor();
	const everywhere = growers.reduce((sum, grower) => sum + grower.normalLb, 0);
	const picked = growers.reduce((sum, grower) => sum + grower.harvestedLb, 0);
	const loss = Math.round((100 * (everywhere - picked)) / everywhere);
	expect(await reader.innerText("main")).toContain(`${loss}%`);
	expect(await axeFindings(reader)).toEqual([]);
}

/** The release's file as anybody takes it, once the worker has made it. */
async function takeFile(): Promise<string> {
	const address = `${stack.baseUrl}/api/v1/releases/1/files/cells.csv`;
	await expect.poll(async () => (await fetch(address)).status, { timeout: 60_000 }).toBe(200);
	return (await fetch(address)).text();
}

/** The file's numbers are the page's, cell by cell, and what the page withholds the file withholds. */
function compareWithPage(file: string, shown: Map<string, MapFigure>): void {
	const [header, ...lines] = file
		.trimEnd()
		.split("\r\n")
		.map((line) => line.split(","));
	const at = (line: string[], column: string) => line[header!.indexOf(column)];
	const counties = lines.filter(
		(line) => at(line, "measure") === "crop_loss" && at(line, "crop") === "apple" && at(line, "area_kind") === "county",
	);
	expect(counties.length).toBe(shown.size);
	for (const line of counties) {
		const cell = shown.get(at(line, "area_code") ?? "");
		const told = [at(line, "value"), at(line, "lower"), at(line, "upper")];
		expect(told, at(line, "area_code")).toEqual(
			[cell?.value, cell?.lower, cell?.upper].map((number) => String(number ?? "")),
		);
		expect(at(line, "status") === "Q").toBe(cell?.status === "withheld");
	}
}
