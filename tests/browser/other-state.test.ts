// An associate of one state asks for another state's growers, answers and surveys at every address of the desk, as the
// table of routes lists them: each is refused as if it were not there, and nothing is written.
import type { Browser, Page } from "playwright-core";
import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { readyForms } from "#app/collect/forms/ready-forms.ts";
import { filled, listAddresses, paramsOf } from "#tests/helpers/addresses.ts";
import { openBrowser, openPage, signInAsAssociate } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { fillWithHolders } from "#tests/walls/row-owners.ts";

let stack: Stack;
let browser: Browser;
let owner: Client;
let associate: Page;
/** Ids of Wisconsin's by the name that routes give them; the survey asks in Wisconsin alone. */
let theirs: Record<string, string>;
/** The same of the associate's own state. */
let ours: Record<string, string>;
/** The survey that asks in both states. */
let sharedSurvey: string;

/** Addresses that hold nothing of one state: why an associate of another may open them. */
const shared: Record<string, string> = {
	"desk/reports/:reportId": "reports tell released figures of the whole network",
	"desk/reports/:reportId/versions": "the same",
	"desk/reports/:reportId/photos": "the same",
	"desk/reports/:reportId/photos/:photoId": "the same",
	"desk/report-photos/:photoId": "the same",
};
/** What every action of the desk could be asked to do, as far as one form can say it. */
const deeds: Record<string, string>[] = [
	{},
	...["open", "close", "copy", "archive", "invite", "remind", "extend"].map((step) => ({ step, wave: "1" })),
	...["waive", "merge", "undo", "leave", "save", "confirm", "correct", "set_aside", "ask", "take", "draft", "note"].map(
		(decision) => ({ decision, intent: decision, step: decision, reason: "A reason.", outcome: "reached", value: "1" }),
	),
	{ name: "Taken", contactName: "Taken", email: "taken@example.com", language: "en", massUnit: "lb", county: "55025" },
];

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	const { iowa, neighbor, wisconsin } = await fillWithHolders(owner);
	await owner.query("update collect.form_version set definition = $1", [JSON.stringify(readyForms.after_harvest)]);
	const one = async (text: string, values: unknown[] = []) => {
		const { rows } = await owner.query<{ id: string }>(text, values);
		return rows[0]!.id;
	};
	sharedSurvey = await one("select survey_id as id from collect.survey");
	await owner.query('update collect.survey set title = \'{"en": "After harvest", "es": "Después"}\'');
	const surveyId = await one(
		`with s as (insert into collect.survey (form_version_id, season, title, crop_keys, closes_at, opened_at)
			select form_version_id, 2032, title, crop_keys, closes_at, now() from collect.survey returning survey_id)
		insert into collect.survey_state select survey_id, '55' from s returning survey_id as id`,
	);
	const idsOf = async (holder: typeof iowa, inSurvey: string, other = holder) => ({
		surveyId: inSurvey,
		operationId: holder.operation_id,
		keptId: holder.operation_id,
		droppedId: other.operation_id,
		plantingId: await one("select planting_id as id from directory.planting where operation_id = $1", [
			holder.operation_id,
		]),
		importId: holder.import_id,
		responseId: holder.response_id,
		findingId: holder.edit_finding_id,
		photoId: await one("select photo_id as id from collect.photo where response_id = $1", [holder.response_id]),
		areaKey: holder === wisconsin ? "55025" : "19103",
		cropKey: "apple",
		measureKey: "crop_loss",
		kind: "invitation",
	});
	const addForm = (key: string, state: string) =>
		one(
			`with f as (insert into collect.form (form_key, state_fips, made_by)
				select $1, array[$2], person_id from auth.person limit 1 returning form_id)
			insert into collect.form_version (form_id, version, definition) select form_id, 1, $3 from f returning form_id as id`,
			[key, state, JSON.stringify({ ...readyForms.after_harvest, key })],
		);
	const part = { key: readyForms.after_harvest.screens[0]!.key, check: "new" };
	theirs = { ...(await idsOf(wisconsin, surveyId)), formId: await addForm("theirs", "55"), ...part };
	ours = { ...(await idsOf(iowa, sharedSurvey, neighbor)), formId: await addForm("ours", "19"), ...part };
	associate = await openPage(browser);
	await signInAsAssociate(associate, stack.baseUrl, owner, ["19"]);
});
afterAll(async () => {
	await owner?.end();
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

const addresses = async () =>
	(await listAddresses()).filter(({ path }) => path.startsWith("desk/") && path.includes(":"));

/** Every way to name what is theirs: their own survey, and in the survey that both states share their growers and answers. */
function waysIn(path: string): string[] {
	const names = paramsOf(path);
	const isShared = names.includes("surveyId") && names.some((name) => name.endsWith("Id") && name !== "surveyId");
	return [filled(path, theirs), ...(isShared ? [filled(path, { ...theirs, surveyId: sharedSurvey })] : [])];
}

/** What is written down of growers, surveys and forms, as one text. */
async function everything(): Promise<string> {
	const { rows } = await owner.query<{ name: string }>(
		"select schemaname || '.' || tablename as name from pg_tables where schemaname in ('directory', 'collect', 'release') order by 1",
	);
	const sums = await Promise.all(
		rows.map(async ({ name }) => {
			const { rows: found } = await owner.query<{ sum: string }>(
				`select coalesce(md5(string_agg(t::text, '|' order by t::text)), 'empty') as sum from ${name} t`,
			);
			return `${name} ${found[0]!.sum}`;
		}),
	);
	return sums.join("\n");
}

test("every id that an address of the desk can name is one that the test knows", async () => {
	const names = new Set(
		(await addresses()).filter(({ path }) => !(path in shared)).flatMap(({ path }) => paramsOf(path)),
	);
	expect([...names].filter((name) => !(name in theirs))).toEqual([]);
	expect((await addresses()).length).toBeGreaterThan(20);
});

test("an associate who opens another state's page is told that there is none", async () => {
	// Forms of others are read, to be copied; what is posted to them is tried below.
	const tried = (await addresses()).filter(({ path }) => !(path in shared) && !path.includes(":formId"));
	// The same addresses with ids of the associate's own state are there, or nothing would have been tried.
	const own = await Promise.all(
		tried.map(async ({ path }) =>
			(await associate.request.get(stack.baseUrl + filled(path, ours), { maxRetries: 2 })).status(),
		),
	);
	expect(own.filter((status) => status === 200).length).toBeGreaterThan(tried.length * 0.7);
	const answers: string[] = [];
	for (const way of tried.flatMap(({ path }) => waysIn(path))) {
		const response = await associate.request.get(stack.baseUrl + way, { maxRedirects: 0, maxRetries: 2 });
		if (response.status() !== 404) answers.push(`${response.status()} ${way}`);
		expect(await response.text()).not.toContain("280");
	}
	expect(answers).toEqual([]);
});

test("an associate who posts to another state's page is refused, and nothing at all is changed", async () => {
	const tried = (await addresses()).filter(({ path, acts }) => acts && !(path in shared));
	expect(tried.length).toBeGreaterThan(8);
	const before = await everything();
	const letIn: string[] = [];
	const post = async (way: string, form: Record<string, string>) => {
		// A kept connection may be let go by the server in the very moment: the request is then sent again.
		const headers = { origin: stack.baseUrl };
		const response = await associate.request.post(stack.baseUrl + way, {
			form,
			maxRedirects: 0,
			headers,
			maxRetries: 2,
		});
		if (response.status() < 400 || response.status() >= 500)
			letIn.push(`${response.status()} ${way} ${JSON.stringify(form)}`);
	};
	for (const way of tried.flatMap(({ path }) => waysIn(path))) await Promise.all(deeds.map((form) => post(way, form)));
	expect(letIn).toEqual([]);
	expect(await everything()).toBe(before);
});
