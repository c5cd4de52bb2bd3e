// A draft whose audit failed, and one that nobody else approved, go out by no address, no operation of the API and no job,
// whoever asks and whatever is sent; the very same calls publish one that may go out.
import { readFileSync } from "node:fs";
import { join } from "node:path";
import type { JobHelpers } from "graphile-worker";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { tasks } from "#app/jobs/tasks.server.ts";
import { operations } from "#app/publish/api/operations.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { addAnsweredSurvey } from "#tests/database/answered-survey-fixture.ts";
import { addSurvey } from "#tests/database/answering-fixture.ts";
import {
	addOperation,
	addPerson,
	asDesk,
	connectOwner,
	loadPlaces,
	useDatabase,
} from "#tests/database/surveys-fixture.ts";
import { type Address, filled, listAddresses, paramsOf } from "#tests/helpers/addresses.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

type Visitor = ReturnType<typeof httpVisitor>;
/** What a draft is set to before each call, so that what one call made of it does not hide what the next could do. */
type Target = { draftId: string; surveyId: string; status: "audit_failed" | "audited" };

const subjects = { coordinator: "demo-marit-osgood", associate: "demo-del-fenwick", researcher: "demo-priya-halloran" };
/** Who may approve comes last: they alone publish what may go out. */
const roles = ["anyone", "grower", "researcher", "associate", "coordinator"] as const;
type Role = (typeof roles)[number];

let stack: Stack;
let owner: Client;
let visitors: Record<Role, Visitor>;
let blocked: Target;
let unapproved: Target;
let good: Target;
/** Approved for a minute that has come, and left to the job. */
let due: Target;

beforeAll(async () => {
	stack = await startStack();
	// Jobs are tried by hand, one by one.
	await stack.kill("worker");
	useDatabase(stack.database, { PHOTO_DIR: stack.photoFolder });
	owner = await connectOwner(stack.database.ownerUrl);
	await loadPlaces(owner);
	const associate = await addPerson(owner, "Iowa's associate", ["19"]);
	const signedIn = await Promise.all(Object.values(subjects).map(signIn));
	const [coordinator, desk, researcher] = signedIn as [Visitor, Visitor, Visitor];
	const personId = await grantRoles();
	visitors = {
		anyone: httpVisitor(stack.baseUrl),
		grower: await openLink(associate),
		researcher,
		associate: desk,
		coordinator,
	};
	blocked = await addTarget(associate, "audit_failed");
	// The coordinator's own: there is nobody else who could approve it.
	unapproved = await addTarget({ ...associate, personId }, "audited");
	good = await addTarget(associate, "audited");
	due = await addTarget(associate, "audited");
	await owner.query(
		`update collect.release_draft set status = 'scheduled', decided_by = $2, decided_at = now(), publish_at = now()
		where release_draft_id = $1`,
		[due.draftId, personId],
	);
});
afterAll(async () => {
	await owner?.end();
	await stack?.[Symbol.asyncDispose]();
});

async function signIn(subject: string): Promise<Visitor> {
	const visitor = httpVisitor(stack.baseUrl);
	const { location } = await visitor.get("/sign-in/start");
	const back = await visitor.get(`${location}&persona=${subject}`);
	await visitor.get(back.location);
	return visitor;
}

/** @returns the coordinator. */
async function grantRoles(): Promise<string> {
	await owner.query(
		`insert into auth.role_grant (person_id, role, state_fips)
		select person_id, role, state from auth.person join (values ($1, 'coordinator', null), ($2, 'associate', '19'),
			($3, 'researcher', null)) as given(subject, role, state) using (subject)`,
		Object.values(subjects),
	);
	const { rows } = await owner.query("select person_id from auth.person where subject = $1", [subjects.coordinator]);
	return rows[0].person_id as string;
}

async function openLink(associate: Associate): Promise<Visitor> {
	const operationId = await addOperation(owner, { state: "19" });
	const surveyId = await addSurvey(associate);
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) =>
		createPersonalLink(trx, { surveyId, operationId, expiresAt }),
	);
	const visitor = httpVisitor(stack.baseUrl);
	await visitor.post(`/r/${token}`, {});
	return visitor;
}

/** A draft with all its cells, that only its status keeps from going out. */
async function addTarget(drafter: Associate, status: Target["status"]): Promise<Target> {
	const surveyId = await addAnsweredSurvey(owner, drafter);
	// A season each: a draft that another survey's release has overtaken would be refused for that alone.
	await owner.query(
		"update collect.survey set season = (select max(season) + 1 from collect.survey) where survey_id = $1",
		[surveyId],
	);
	const made = await asDesk(drafter, async (trx) => {
		await closeSurvey(trx, drafter, surveyId);
		return createDraft(trx, drafter, surveyId, networkRules);
	});
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	const target = { draftId: made.releaseDraftId, surveyId, status };
	await owner.query(
		"update collect.release_draft set audit = jsonb_set(audit, '{passed}', $2), status = $3 where release_draft_id = $1",
		[target.draftId, status === "audited", status],
	);
	return target;
}

/** Drafts that an associate has begun anew are gone again too. */
async function putBack({ draftId, surveyId, status }: Target): Promise<void> {
	await owner.query("delete from collect.release_draft where survey_id = $1 and release_draft_id <> $2", [
		surveyId,
		draftId,
	]);
	await owner.query(
		`update collect.release_draft set status = $2, decided_by = null, decided_at = null, decision_note = null, publish_at = null
		where release_draft_id = $1 and status not in ('approved', $2)`,
		[draftId, status],
	);
}

/** Everything that readers may come to, as one text. */
async function released(): Promise<string> {
	const { rows: tables } = await owner.query<{ name: string }>(
		"select schemaname || '.' || tablename as name from pg_tables where schemaname in ('release', 'publish') order by 1",
	);
	const text: string[] = [];
	for (const { name } of tables) {
		const { rows } = await owner.query<{ row: string }>(`select t::text as row from ${name} t order by 1`);
		text.push(...rows.map(({ row }) => `${name} ${row}`));
	}
	return text.join("\n");
}
async function releases(): Promise<string[]> {
	const { rows } = await owner.query("select release_id from release.release");
	return rows.map(({ release_id }) => release_id as string);
}

const anything = {
	reason: "A reason.",
	reasonEn: "A reason.",
	reasonEs: "Una razón.",
	note: "A note.",
	publishOn: new Date(Date.now() + 86_400_000).toISOString().slice(0, 10),
	publishAt: "09:00",
};

/** Forms for an address: one that asks for publication, and one for each word by which its own schemas tell steps apart. */
function formsFor({ file }: Address): Record<string, string>[] {
	const source = readFileSync(file, "utf8");
	const schemas = [...source.matchAll(/"#(app\/[\w/-]+(?:\.schema|\.server)?\.ts)"/g)].map(([, path]) =>
		readFileSync(join(import.meta.dirname, "../..", path!), "utf8"),
	);
	const text = [source, ...schemas].join("\n");
	const steps = [...text.matchAll(/\b(step|decision|intent|act|do|reply): z\.(?:literal|enum)\(([^)]*)\)/g)].flatMap(
		([, name, words]) => [...words!.matchAll(/"(\w+)"/g)].map(([, word]) => [name!, word!] as const),
	);
	const told = new Map(steps.map(([name, word]) => [`${name} ${word}`, { ...anything, [name]: word }]));
	const asked = { ...anything, decision: "publish", intent: "publish", step: "publish", act: "publish" };
	return [asked, ...told.values()];
}

/** The pages on which drafts are made and decided, to which everybody posts everything. */
const decidedOn = new Set(["desk/surveys/:surveyId/release", "network/releases/:draftId"]);

/**
 * Posts everything to an address as one person, in the order of the schemas, and as somebody whom the desk and the network
 * turn away before they look at the form, the first of it; pages as the framework's scripts post to them,
 * whose answers draw nothing. @returns whether any of it was taken
 */
async function postAll(role: Role, address: Address, target: Target): Promise<boolean> {
	let taken = false;
	const forms = formsFor(address);
	const few = ["anyone", "grower", "researcher"].includes(role) && !decidedOn.has(address.path);
	for (const form of few ? forms.slice(0, 1) : forms) {
		const way = filled(address.path, idsOf(target)) + (address.file.endsWith(".tsx") ? ".data" : "");
		const { status } = await visitors[role].post(way, form);
		if (status >= 400) continue;
		taken = true;
		if (target !== good) await putBack(target);
	}
	return taken;
}

const idsOf = ({ draftId, surveyId }: Target): Record<string, string> => ({
	...Object.fromEntries(["release", "reportId", "roleGrantId", "operationId", "formId"].map((name) => [name, draftId])),
	draftId,
	surveyId,
});
/** Signing out comes last, so that whoever asks is who they are. */
const acting = async () =>
	(await listAddresses())
		.filter(({ acts }) => acts)
		.toSorted((a, b) => Number(a.path === "sign-out") - Number(b.path === "sign-out"));
const aboutDrafts = ({ path }: Address) => paramsOf(path).some((name) => ["draftId", "surveyId"].includes(name));

test("the forms are those of the pages: of a draft's decision each, of others what their schemas tell", async () => {
	const at = (path: string) => acting().then((list) => formsFor(list.find((address) => address.path === path)!));
	const decisions = (await at("network/releases/:draftId")).flatMap(({ decision }) => decision ?? []);
	expect(decisions).toEqual(["publish", "publish", "schedule", "unschedule", "reject", "withdraw"]);
	const steps = (await at("desk/surveys/:surveyId/release")).flatMap(({ step }) => step ?? []);
	expect(steps).toEqual(expect.arrayContaining(["draft", "cancel", "revise"]));
	expect((await acting()).length).toBeGreaterThan(60);
});

test("no address publishes a draft that is blocked or not approved, whoever posts whatever to it", async () => {
	const before = await released();
	const list = await acting();
	const opened = new Set<Role>();
	const tryAll = async (role: Role) => {
		for (const address of list.filter(({ path }) => path !== "sign-out")) {
			for (const target of aboutDrafts(address) ? [blocked, unapproved] : [blocked]) {
				if (await postAll(role, address, target)) opened.add(role);
			}
		}
	};
	// These three change no draft, so that they need not wait for each other.
	await Promise.all(roles.slice(0, 3).map(tryAll));
	await tryAll("associate");
	await tryAll("coordinator");
	expect(await releases()).toEqual([]);
	expect(await released()).toBe(before);
	expect(opened.size).toBe(roles.length);
});

/** Asks every operation of the API for what nobody published. */
async function tryApi(role: Role, methods: string[]): Promise<void> {
	for (const { path } of Object.values(operations)) {
		const open = !path.includes("{release}");
		for (const { draftId } of open ? [blocked] : [blocked, unapproved]) {
			const address = `/api/v1${path.replace("{release}", draftId).replace("{file}", "release.csv")}`;
			for (const method of methods) {
				const { status } = await visitors[role].send(address, { method, ...(method !== "GET" && { body: "{}" }) });
				expect(status < 400, `${method} ${address}`).toBe(open && method === "GET");
			}
		}
	}
}

test("no operation of the API does either, by whichever method", async () => {
	const before = await released();
	await tryApi("anyone", ["GET", "POST", "PUT", "PATCH", "DELETE"]);
	// Sessions are nothing to the API; whether they are is what is tried.
	for (const role of roles.slice(1)) await tryApi(role, ["GET", "POST"]);
	expect(await released()).toBe(before);
});

/** Runs a job as its queue would, about this draft and its survey. */
async function run(name: keyof typeof tasks, { draftId, surveyId }: Target): Promise<void> {
	const ids = ["mailingId", "personId", "releaseId", "reportId", "subscriberId", "followId", "requestId"];
	const others = ["invitationId", "roleGrantId", "importId"];
	const payload = {
		...Object.fromEntries([...ids, ...others].map((id) => [id, draftId])),
		releaseDraftId: draftId,
		surveyId,
		responseId: null,
		wave: 1,
		kind: "invitation",
		language: "en",
		change: "revised",
		fileNames: [],
		step: "write",
	};
	const helpers = { job: { attempts: 1, max_attempts: 25 } } as JobHelpers;
	// Most find nothing of that id and say so; a payload that they do not know would be no try.
	await Promise.resolve(tasks[name](payload, helpers)).catch((error: Error) => expect(error.name).not.toBe("ZodError"));
}

test("no job does either, and the one that publishes does so with what was approved and is due", async () => {
	const before = await released();
	for (const target of [blocked, unapproved]) {
		for (const name of Object.keys(tasks) as (keyof typeof tasks)[]) {
			await putBack(target);
			await run(name, target);
			expect(await releases(), name).toEqual([]);
		}
	}
	expect(await released()).toBe(before);
	await run("publish_release", due);
	expect(await releases()).toEqual([due.draftId]);
});

test("the same calls publish a draft that may go out, for the coordinator and nobody else", async () => {
	const list = (await acting()).filter(aboutDrafts);
	for (const role of roles) {
		expect(await releases(), role).not.toContain(good.draftId);
		await putBack(good);
		for (const address of list) {
			// What an associate drafts anew takes the place of this one: that is tried above.
			if (role === "associate" && address.path.startsWith("desk/surveys/:surveyId")) continue;
			await postAll(role, address, good);
		}
	}
	expect(await releases()).toContain(good.draftId);
});
