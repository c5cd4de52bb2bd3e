import { parse } from "csv-parse/sync";
import { unzipSync } from "fflate";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { addOddRelease } from "#tests/database/released-files-fixture.ts";
import { connectOwner } from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser, openPage, signIn } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let browser: Browser;
type Visitor = Awaited<ReturnType<typeof openPage>>;
type Row = Record<string, string | number | null>;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack({ coordinatorSubject: "demo-marit-osgood" }), openBrowser()]);
	const owner = await connectOwner(stack.database.ownerUrl);
	for (const season of [2031, 2032]) await addOddRelease(owner, season);
	await owner.end();
});
afterAll(async () => {
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

test("a researcher asks, is approved, builds a table over two seasons, takes it along and has it again by a key", async () => {
	const [researcher, coordinator] = [await openPage(browser), await openPage(browser)];
	await askForAccess(researcher);
	await approve(coordinator);
	await buildTable(researcher);
	const files = await takeEveryFile(researcher);
	const addresses = await researcher
		.locator("a[href^='/api/v1/']")
		.evaluateAll((links) => links.map((link) => (link as HTMLAnchorElement).href));
	const permalink = await researcher.locator("a[href*='/dataroom/tables?release=']").first().getAttribute("href");
	await showsWithoutScripts(researcher, permalink!);
	const key = await makeKey(researcher);
	await repeatByScript(addresses, key, files.get("cells.csv")!);
	// The coordinator's first page and the API's outage, which was made on purpose, tell of themselves in the console.
	for (const page of [researcher, coordinator])
		expect(page.complaints.filter((line) => !/status of (400|403)|ERR_FAILED/.test(line))).toEqual([]);
}, 180_000);

async function askForAccess(researcher: Visitor): Promise<void> {
	await signIn(researcher, stack.baseUrl, "Jonas Weir");
	await researcher.goto(`${stack.baseUrl}/dataroom/access`);
	await researcher.fill("[name=affiliation]", "Institute of Pomology");
	await researcher.fill("[name=purpose]", "How far a late freeze reaches from county to county.");
	await researcher.check("[name=agreed]");
	await researcher.getByRole("button", { name: "Send the request" }).click();
	await researcher.getByText("Your request is waiting for a decision").first().waitFor();
}

async function approve(coordinator: Visitor): Promise<void> {
	await signIn(coordinator, stack.baseUrl, "Marit Osgood");
	await coordinator.goto(`${stack.baseUrl}/network/access`);
	await coordinator.getByRole("button", { name: "Approve" }).click();
	await coordinator.getByText("The request is approved.").waitFor();
}

/** Chooses with scripts: each change is told out of the data API, also after it could not be reached. */
async function buildTable(researcher: Visitor): Promise<void> {
	await researcher.goto(`${stack.baseUrl}/dataroom/tables`);
	await researcher.getByRole("table").waitFor();
	const asked = researcher.waitForResponse((response) => response.url().includes("/api/v1/releases/1/cells?"));
	await researcher.getByLabel("Counties", { exact: true }).check();
	expect((await asked).status()).toBe(200);
	const row = (name: string) => researcher.locator("main tbody tr", { hasText: name });
	await row("Linn County, Iowa").first().getByText("Withheld").first().waitFor();
	await row("Johnson County, Iowa").first().getByText("38%").first().waitFor();

	await researcher.route("**/api/v1/**", (route) => route.abort());
	await researcher.getByLabel("Plum", { exact: true }).uncheck();
	await researcher.getByText("The figures did not arrive").waitFor();
	await researcher.unroute("**/api/v1/**");
	await researcher.getByRole("button", { name: "Try again" }).click();
	await row("Story County, Iowa").first().getByText("No growers").first().waitFor();
	await researcher.getByText("does not have the same name or description").waitFor();
	expect(await axeFindings(researcher)).toEqual([]);
	expect(new URL(researcher.url()).searchParams.getAll("kind")).toEqual(["region", "county"]);

	// A choice that makes no table is said beside its field, and nothing else is lost.
	await researcher.getByLabel("Apple", { exact: true }).uncheck();
	await researcher.locator("#problem-crop").waitFor();
	await researcher.getByLabel("Apple", { exact: true }).check();
	await row("Johnson County, Iowa").first().waitFor();
}

/** Every file by its link, as bytes; the archive by a press of it. */
async function takeEveryFile(researcher: Visitor): Promise<Map<string, Buffer>> {
	const links = await researcher
		.locator("a[download]")
		.evaluateAll((all) => all.map((link) => [link.textContent ?? "", (link as HTMLAnchorElement).href] as const));
	const files = new Map<string, Buffer>();
	for (const [name, address] of links) {
		const response = await researcher.request.get(address);
		expect(response.status(), name).toBe(200);
		files.set(name, await response.body());
	}
	const download = researcher.waitForEvent("download");
	await researcher.getByRole("link", { name: "table.zip" }).click();
	expect((await download).suggestedFilename()).toMatch(/^tallygrove-table-[0-9a-f]{10}\.zip$/);
	const inArchive = Object.keys(unzipSync(files.get("table.zip")!)).map((path) => path.split("/")[1]);
	expect(new Set(inArchive)).toEqual(new Set(links.map(([name]) => name).filter((name) => name !== "table.zip")));
	return files;
}

async function showsWithoutScripts(researcher: Visitor, permalink: string): Promise<void> {
	const storageState = await researcher.context().storageState();
	const plain = await openPage(browser, { javaScriptEnabled: false, storageState });
	await plain.goto(permalink);
	await plain.locator("main tbody tr", { hasText: "Linn County, Iowa" }).getByText("Withheld").first().waitFor();
	await plain.getByLabel("Counties", { exact: true }).uncheck();
	await plain.getByRole("button", { name: "Show the table" }).click();
	await plain.getByRole("table").waitFor();
	expect(await plain.locator("main tbody tr", { hasText: "County" }).count()).toBe(0);
}

async function makeKey(researcher: Visitor): Promise<string> {
	await researcher.goto(`${stack.baseUrl}/dataroom/keys`);
	await researcher.fill("[name=label]", "Nightly table");
	await researcher.getByRole("button", { name: "Make the key" }).click();
	await researcher.getByText("Your new key").waitFor();
	return (await researcher.locator("code").first().innerText()).trim();
}

const plainText = (value: unknown) => (value === null || value === undefined ? "" : String(value));

/** A program with the key asks the addresses that the page told, and has the file's own cells, as JSON and as CSV. */
async function repeatByScript(addresses: string[], key: string, file: Buffer): Promise<void> {
	const wanted = (parse(file, { columns: true }) as Row[]).map((row) => Object.values(row).map(plainText));
	expect(wanted.length).toBe(10);
	const ask = async (accept: string) => {
		const answers = await Promise.all(
			addresses.map((address) => fetch(address, { headers: { authorization: `Bearer ${key}`, accept } })),
		);
		for (const answer of answers) {
			expect(answer.status).toBe(200);
			expect(answer.headers.get("ratelimit-policy")).toContain('"key"');
		}
		return answers;
	};
	const json = (await Promise.all((await ask("application/json")).map((answer) => answer.json()))) as { data: Row[] }[];
	const texts = await Promise.all((await ask("text/csv")).map((answer) => answer.text()));
	// In CSV an apostrophe leads a text that a spreadsheet would run.
	const unguarded = wanted.map((row) => row.map((field) => field.replace(/^'=/, "=")));
	expect(json.flatMap(({ data }) => data.map((row) => Object.values(row).map(plainText)))).toEqual(unguarded);
	expect(texts.flatMap((text) => (parse(text) as string[][]).slice(1))).toEqual(wanted);
}
