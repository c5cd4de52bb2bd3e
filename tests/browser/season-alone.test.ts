import { Client } from "pg";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { axeFindings, openBrowser, openPage, signInAsAssociate } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { checkInvitations, readInbox } from "./season/mails.ts";
import { badRows, goodGrowers, mendedFile, mendedGrowers, messyFile, notToBeMailed } from "./season/messy-list.ts";

const everybody = [...goodGrowers, ...mendedGrowers];
let stack: Stack;
let browser: Browser;
let owner: Client;
let page: Awaited<ReturnType<typeof openPage>>;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	for (const [index, { name, email, county, trees }] of notToBeMailed.entries())
		await owner.query(
			`with w as (insert into directory.owner (name) values ($1) returning owner_id),
			o as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email, mail_wanted,
					mail_returned_at)
				select owner_id, $1, county_fips, state_fips, 'Of old', $2, $3, $4 from w, directory.county
				where state_fips = '19' and name = $5 returning operation_id)
			insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, 'apple', $6 from o`,
			[name, email, index === 2, index === 2 ? new Date() : null, county, trees - 10],
		);
	page = await openPage(browser);
	await signInAsAssociate(page, stack.baseUrl, owner, ["19"]);
});
afterAll(async () => {
	await owner?.end();
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

const press = (name: string | RegExp) => page.getByRole("button", { name, exact: typeof name === "string" }).click();
const confirm = (name: string) => page.locator("dialog[open]").getByRole("button", { name, exact: true }).click();
const follow = (name: string | RegExp) => page.getByRole("link", { name }).first().click();
const one = async (query: string, values: unknown[] = []) =>
	(await owner.query<Record<string, unknown>>(query, values)).rows[0];
const byName = <T extends { name: string }>(list: T[]) => list.toSorted((a, b) => (a.name < b.name ? -1 : 1));
const accessible = async () => expect(await axeFindings(page)).toEqual([]);
/** What was mended on a page comes back with it; a page that was refused tells of it in the console. */
const complaints = () => page.complaints.filter((line) => !line.includes("400 (Bad Request)"));

test("an associate alone takes one survey from a messy list of growers to the next season's draft", async () => {
	await readInGrowers();
	const formId = await makeForm();
	const { survey, invited } = await openAndInvite();
	await takeTwoCalls(survey);
	await clearChecks(survey);
	await closeAndCopy(survey, formId, invited);
	expect(complaints()).toEqual([]);
}, 240_000);

/** Reads a file in as far as its rows are checked. */
async function readIn(name: string, file: Buffer): Promise<void> {
	await page.goto(`${stack.baseUrl}/desk/growers/import`);
	await page.setInputFiles("[name=file]", { name, mimeType: "text/csv", buffer: file });
	await press("Read the file");
	await press("Check the rows");
}

async function takeIn(count: number): Promise<void> {
	await press(`Take ${count} growers into the list`);
	await confirm("Take them in");
	await page.getByRole("button", { name: "Undo this import" }).waitFor();
}

async function readInGrowers(): Promise<void> {
	await readIn("growers.csv", messyFile());
	await page.getByText(`${badRows.length} rows need fixing`).waitFor();
	for (const { says } of badRows) expect(await page.getByRole("cell", { name: says }).count(), says).toBe(1);
	await accessible();
	const [download] = await Promise.all([page.waitForEvent("download"), follow("Download the rows to fix")]);
	const chunks: Buffer[] = [];
	for await (const chunk of await download.createReadStream()) chunks.push(chunk as Buffer);
	const toMend = Buffer.concat(chunks).toString();
	for (const { name } of goodGrowers) expect(toMend).not.toContain(name);
	expect(await one("select count(*)::int as n from directory.operation")).toEqual({ n: notToBeMailed.length });
	await takeIn(goodGrowers.length);
	await readIn("mended.csv", mendedFile(toMend));
	await takeIn(mendedGrowers.length);

	const { rows } = await owner.query(
		`select o.name, o.contact_name as contact, coalesce(o.email, '') as email, c.name as county, o.language,
			p.bearing_trees as trees
		from directory.operation o join directory.county c using (county_fips) join directory.planting p using (operation_id)`,
	);
	expect(byName(rows)).toEqual(byName(everybody));
}

/** @returns the form, made from the ready one and published. */
async function makeForm(): Promise<string> {
	await page.goto(`${stack.baseUrl}/desk/forms`);
	await follow("Copy the form After harvest");
	await page.fill("[name='title.en']", "Harvest in the east");
	await page.fill("[name='title.es']", "La cosecha en el este");
	await press("Make the form");
	await follow("Check and publish");
	await press("Publish version 1");
	await confirm("Publish");
	await page.getByText("Version 1 is published.").waitFor();
	const form = await one(
		`select f.form_id as id, v.version, v.definition -> 'title' as title from collect.form f
		join collect.form_version v using (form_id) where v.definition -> 'title' ->> 'en' = 'Harvest in the east'`,
	);
	expect(form).toMatchObject({ version: 1, title: { en: "Harvest in the east", es: "La cosecha en el este" } });
	return form!.id as string;
}

/** @returns the survey's address and how many were invited, once every mail has gone out. */
async function openAndInvite(): Promise<{ survey: string; invited: number }> {
	await page.goto(`${stack.baseUrl}/desk/surveys/new`);
	await page.selectOption("[name=formKey]", { label: "Harvest in the east" });
	await page.fill("[name=closesOn]", new Date(Date.now() + 20 * 86_400_000).toISOString().slice(0, 10));
	await press("Make the draft");
	await press("Open the survey");
	await confirm("Open it");
	await page.getByText("The survey is open.").waitFor();
	expect(await one("select count(*)::int as n from collect.frame_operation")).toEqual({ n: everybody.length });
	const refused = new Set(notToBeMailed.map(({ email }) => email));
	const asked = everybody.filter(({ email }) => email !== "" && !refused.has(email));
	await press("Send invitations");
	await confirm("Send");
	await page.getByText(`${asked.length} e-mails are on their way.`).waitFor();
	await expect
		.poll(() => one("select count(*)::int as n from collect.mailing where sent_at is null"), { timeout: 120_000 })
		.toEqual({ n: 0 });
	await checkInvitations(await readInbox(stack.inboxUrl), asked, owner);
	return { survey: page.url(), invited: asked.length };
}

/** One who wants no mail, and one whose mail came back: both tell more than seems possible, and say that it is right. */
const callers = [notToBeMailed[0]!, notToBeMailed[2]!];

async function takeTwoCalls(survey: string): Promise<void> {
	const before = (await readInbox(stack.inboxUrl)).length;
	const codes: string[] = [];
	for (const { name, trees } of callers) {
		await page.goto(`${survey}/calls?q=${encodeURIComponent(name)}`);
		await follow(`Call ${name}`);
		await follow("Enter their answers");
		await page.locator("[name$='.normal_crop']").fill(String(trees * 40));
		await page.locator("[name$='.harvested']").fill(String(trees * 100));
		await page.check("[name=pledge]");
		await press("Send in");
		await page.locator("main [role=alert] [name=confirm]").check();
		await press("Send in");
		codes.push(/code (\S+)\./.exec(await page.getByText(/Sent in. Receipt code/).innerText())![1]!);
	}
	const { rows } = await owner.query(
		`select o.name, f.disposition, b.mode, p.display_name as who from collect.frame_operation f
		join directory.operation o using (operation_id) join collect.response r using (survey_id, operation_id)
		join collect.submission b using (response_id) join auth.person p on p.person_id = b.entered_by order by b.submitted_at`,
	);
	const shared = { disposition: "complete", mode: "telephone", who: "Del Fenwick" };
	expect(rows).toEqual(callers.map(({ name }) => ({ name, ...shared })));

	// Sending in asks for a receipt, also of who wants no other mail; an address that mail came back from gets none.
	const inbox = () => readInbox(stack.inboxUrl);
	await expect.poll(async () => (await inbox()).length, { timeout: 30_000 }).toBe(before + 1);
	const [receipt] = await inbox();
	expect(receipt).toMatchObject({ to: [callers[0]!.email], headers: { "content-language": callers[0]!.language } });
	expect(receipt!.subject).toContain(`receipt ${codes[0]!}`);
}

const openFindings = () => one("select count(*)::int as n from collect.edit_finding where outcome is null");

/** The first answer is corrected, after a look at what that does to the figures; what else waits is confirmed at once. */
async function clearChecks(survey: string): Promise<void> {
	const [first] = callers;
	await expect.poll(openFindings, { timeout: 30_000 }).toEqual({ n: 2 });
	await page.goto(`${survey}/checks`);
	await follow(first!.name);
	await follow("Correct: What you picked");
	await page.fill("[name=harvested]", String(first!.trees * 10));
	await page.fill("[name=reason]", "Rang back: a nought too many");
	await press("See what it changes");
	await page.getByRole("columnheader", { name: "With your correction" }).waitFor();
	expect(await one("select count(*)::int as n from collect.correction")).toEqual({ n: 0 });
	// What is listed as moved moves.
	const moves = await page
		.locator("#estimates tbody tr")
		.evaluateAll((rows) =>
			rows.map((row) => [...row.querySelectorAll("td")].slice(-2).map((cell) => cell.textContent)),
		);
	expect(moves.length).toBeGreaterThan(0);
	for (const [before, after] of moves) expect(after).not.toBe(before);
	await accessible();
	await press("Save the correction");
	await page.getByText("The correction counts from now on.").waitFor();
	const picked = await one(
		`select y from collect.fact join directory.operation using (operation_id)
		where name = $1 and measure_key = 'base.harvested_lb' and crop_key = 'apple'`,
		[first!.name],
	);
	expect(picked).toEqual({ y: first!.trees * 10 });

	await page.goto(`${survey}/checks`);
	for (const box of await page.locator("tbody [name=chosen]").all()) await box.check();
	await press("Confirm the chosen answers");
	await confirm("Confirm the chosen answers");
	await page.getByText("No answer is waiting to be checked").waitFor();
	expect(await openFindings()).toEqual({ n: 0 });
}

async function closeAndCopy(survey: string, formId: string, invited: number): Promise<void> {
	await page.goto(survey);
	await press("Close the survey");
	await confirm("Close it");
	await page.getByText("The survey is closed.").first().waitFor();
	await press("Copy for next season");
	await confirm("Make the draft");
	await page.getByText("This is the draft for next season.", { exact: false }).waitFor();
	const { rows } = await owner.query(
		`select s.season, s.opened_at is not null as opened, s.closed_at is not null as closed, v.form_id as form,
			(select array_agg(state_fips) from collect.survey_state t where t.survey_id = s.survey_id) as states,
			(select count(*)::int from collect.mailing m where m.survey_id = s.survey_id and m.kind = 'invitation') as invited
		from collect.survey s join collect.form_version v using (form_version_id) order by season`,
	);
	const season = new Date().getUTCFullYear();
	const shared = { form: formId, states: ["19"] };
	expect(rows).toEqual([
		{ ...shared, season, opened: true, closed: true, invited },
		{ ...shared, season: season + 1, opened: false, closed: false, invited: 0 },
	]);
	// Beside the one receipt, nobody was written to by entering, checking, closing or copying.
	expect(await readInbox(stack.inboxUrl)).toHaveLength(invited + 1);
}
