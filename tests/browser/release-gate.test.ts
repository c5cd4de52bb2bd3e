// A draft whose audit failed, and one that nobody else approved, go out by no address, no operation of the API and no job,
// whoever asks and whatever is sent; the very same calls publish one that may go out.
import type { JobHelpers } from "graphile-worker";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { type KeyScope, keyScopes, makeApiKey } from "#app/auth/api-keys.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Researcher } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { tasks } from "#app/jobs/tasks.server.ts";
import { operations } from "#app/publish/api/operations.ts";
import { addSurvey } from "#tests/database/answering-fixture.ts";
import { addOperation, addPerson, connectOwner, loadPlaces, useDatabase } from "#tests/database/surveys-fixture.ts";
import { type Address, filled } from "#tests/helpers/addresses.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { aboutDrafts, acting, decidedOn, formsFor, idsOf } from "./gate/calls.ts";
import { addTarget, putBack, released, releases, type Target } from "./gate/targets.ts";

type Visitor = ReturnType<typeof httpVisitor>;

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
	blocked = await addTarget(owner, associate, "audit_failed");
	// The coordinator's own: there is nobody else who could approve it.
	unapproved = await addTarget(owner, { ...associate, personId }, "audited");
	good = await addTarget(owner, associate, "audited");
	due = await addTarget(owner, associate, "audited");
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

/** A researcher's programs: one for every choice of what a key is good for. */
async function keyHolders() {
	const { rows } = await owner.query("select person_id from auth.person where subject = $1", [subjects.researcher]);
	const person = { personId: rows[0].person_id, displayName: "A researcher", email: null, language: null };
	const researcher: Researcher = { ...person, role: "researcher" };
	const choices: KeyScope[][] = [...keyScopes.map((scope) => [scope]), [...keyScopes]];
	return Promise.all(
		choices.map(async (scopes) => {
			const made = await makeApiKey(researcher, { label: scopes.join(), scopes, days: "30" });
			if (made === "too_many_keys") throw new Error(made);
			return { scopes, visitor: httpVisitor(stack.baseUrl, "en", { authorization: `Bearer ${made.key}` }) };
		}),
	);
}

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
		if (target !== good) await putBack(owner, target);
	}
	return taken;
}

test("the forms are those of the pages: of a draft's decision each, of others what their schemas tell", async () => {
	const list = await acting();
	const at = (path: string) => formsFor(list.find((address) => address.path === path)!);
	const decisions = at("network/releases/:draftId").flatMap(({ decision }) => decision ?? []);
	expect(decisions).toEqual(["publish", "publish", "schedule", "unschedule", "reject", "withdraw"]);
	const steps = at("desk/surveys/:surveyId/release").flatMap(({ step }) => step ?? []);
	expect(steps).toEqual(expect.arrayContaining(["draft", "cancel", "revise"]));
	expect(list.length).toBeGreaterThan(60);
});

test("no address publishes a draft that is blocked or not approved, whoever posts whatever to it", async () => {
	const before = await released(owner);
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
	expect(await releases(owner)).toEqual([]);
	expect(await released(owner)).toBe(before);
	expect(opened.size).toBe(roles.length);
});

const methods = ["GET", "POST", "PUT", "PATCH", "DELETE"];

/** Asks every operation of the API for what nobody published. @param scopes of the key that is sent, if one is */
async function tryApi(visitor: Visitor, scopes: readonly KeyScope[] = keyScopes): Promise<void> {
	for (const { path, scope } of Object.values(operations)) {
		const open = !path.includes("{release}");
		for (const { draftId } of open ? [blocked] : [blocked, unapproved]) {
			const address = `/api/v1${path.replace("{release}", draftId).replace("{file}", "release.csv")}`;
			for (const method of methods) {
				const { status } = await visitor.send(address, { method, ...(method !== "GET" && { body: "{}" }) });
				expect(status < 400, `${method} ${address}`).toBe(open && method === "GET" && scopes.includes(scope));
			}
		}
	}
}

test("no operation of the API does either, by whichever method, session and key", async () => {
	const before = await released(owner);
	// Sessions are nothing to the API; whether they are is what is tried.
	for (const role of roles) await tryApi(visitors[role]);
	for (const { visitor, scopes } of await keyHolders()) await tryApi(visitor, scopes);
	expect(await released(owner)).toBe(before);
});

test("the pages on which drafts are decided do neither, for a key or by another method", async () => {
	const before = await released(owner);
	const askedBy = [...roles.map((role) => visitors[role]), ...(await keyHolders()).map(({ visitor }) => visitor)];
	const pages = (await acting()).filter(({ path }) => decidedOn.has(path));
	expect(pages).toHaveLength(decidedOn.size);
	for (const visitor of askedBy) {
		for (const page of pages) {
			for (const target of [blocked, unapproved]) {
				for (const method of methods.slice(1)) {
					const body = new URLSearchParams(formsFor(page)[0]!);
					const { status } = await visitor.send(`${filled(page.path, idsOf(target))}.data`, { method, body });
					if (status < 400) await putBack(owner, target);
				}
			}
		}
	}
	expect(await releases(owner)).toEqual([]);
	expect(await released(owner)).toBe(before);
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
	const before = await released(owner);
	for (const target of [blocked, unapproved]) {
		for (const name of Object.keys(tasks) as (keyof typeof tasks)[]) {
			await putBack(owner, target);
			await run(name, target);
			expect(await releases(owner), name).toEqual([]);
		}
	}
	expect(await released(owner)).toBe(before);
	await run("publish_release", due);
	expect(await releases(owner)).toEqual([due.draftId]);
});

test("the same calls publish a draft that may go out, for the coordinator and nobody else", async () => {
	const list = (await acting()).filter(aboutDrafts);
	for (const role of roles) {
		expect(await releases(owner), role).not.toContain(good.draftId);
		await putBack(owner, good);
		for (const address of list) {
			// What an associate drafts anew takes the place of this one: that is tried above.
			if (role === "associate" && address.path.startsWith("desk/surveys/:surveyId")) continue;
			await postAll(role, address, good);
		}
	}
	expect(await releases(owner)).toContain(good.draftId);
});
