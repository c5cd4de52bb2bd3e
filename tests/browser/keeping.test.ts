import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { askGrower, closeLongAgo } from "#tests/database/answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "#tests/database/surveys-fixture.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let owner: Client;
let associate: Associate;

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

/** A grower who has begun and opened the survey by a link, with the addresses that the page of a planting posts to. */
async function begun() {
	const { place, step } = await askGrower(owner, associate);
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) => createPersonalLink(trx, { ...place, expiresAt }));
	const visitor = httpVisitor(stack.baseUrl);
	await visitor.post(`/r/${token}`, {});
	const address = `/answer/${place.surveyId}/${place.operationId}`;
	return { ...place, visitor, address, ask: `${address}/ask/${step}`, keep: `${address}/keep/${step}` };
}

const typed = (harvested: string, more: Record<string, string> = {}) => ({
	bearing_trees: "40",
	normal_crop: "4000",
	normal_crop_unit: "lb",
	harvested,
	harvested_unit: "lb",
	_seen: "0",
	...more,
});
const kept = async (answer: Promise<{ status: number; text: string }>) => {
	const { status, text } = await answer;
	return [status, JSON.parse(text)];
};

test("a step is kept as it is typed, and told to another device that has not seen it", async () => {
	const { visitor, keep, ask } = await begun();
	expect(await kept(visitor.post(keep, typed("50")))).toEqual([200, { kept: true, version: 1, unread: [] }]);
	expect(await kept(visitor.post(keep, typed("60 what", { _seen: "1" })))).toEqual([
		200,
		{ kept: true, version: 1, unread: ["harvested"] },
	]);
	expect(await kept(visitor.post(keep, typed("70")))).toEqual([409, { kept: false, version: 1, unread: [] }]);
	const page = await visitor.get(ask);
	expect(page.text).toMatch(/name="_seen" value="1"/);
	expect(page.text).toMatch(/name="harvested"[^>]*value="50"/);
});

test("a number is read in the language in which it was typed, whatever the page speaks when it is sent", async () => {
	const { visitor, keep, surveyId } = await begun();
	await visitor.post("/language", { language: "es", returnTo: "/" });
	expect(await kept(visitor.post(keep, typed("12,500", { _language: "en" })))).toEqual([
		200,
		{ kept: true, version: 1, unread: [] },
	]);
	const held = "collect.answer join collect.response using (response_id) where survey_id = $1 and value = '12500'";
	expect(await count(owner, held, [surveyId])).toBe(1);
});

test("without scripts, going on with what another device has changed shows both and lets one choose", async () => {
	const { visitor, keep, ask } = await begun();
	await visitor.post(keep, typed("50"));
	const both = await visitor.post(ask, typed("70"));
	expect(both.status).toBe(409);
	expect(both.text).toContain("changed on another device");
	expect(both.text).toMatch(/Here:.{0,40}70.{0,40}On the other device:.{0,40}50/s);
	expect(both.text).toMatch(/name="harvested"[^>]*value="70"/);
	expect((await visitor.get(ask)).text).toMatch(/name="harvested"[^>]*value="50"/);
	expect((await visitor.post(ask, typed("70", { _seen: "1" }))).status).toBe(303);
	expect((await visitor.get(ask)).text).toMatch(/name="harvested"[^>]*value="70"/);
});

test("what needs mending keeps the version it was typed upon", async () => {
	const { visitor, keep, ask } = await begun();
	const wrong = await visitor.post(ask, typed("a lot"));
	expect(wrong.status).toBe(400);
	expect(wrong.text).toMatch(/name="_seen" value="0"/);
	// Before anything is mended it is said that there are other answers, with what was typed as it was typed.
	await visitor.post(keep, typed("50"));
	const both = await visitor.post(ask, typed("a lot"));
	expect(both.status).toBe(409);
	expect(both.text).toMatch(/Here:.{0,200}a lot.{0,200}On the other device:.{0,40}50/s);
	expect((await visitor.post(ask, typed("a lot", { _seen: "1" }))).status).toBe(400);
});

test("what the page itself kept before it was to be mended is not another device's, also before its script has begun", async () => {
	const { visitor, keep, ask } = await begun();
	const change = { _change: "change-two", _unsure: "change-one" };
	// The first was sent as it was typed; going on overtook it, and came back to be mended.
	const wrong = await visitor.post(ask, typed("a lot", change));
	await visitor.post(keep, typed("50", { _change: "change-one" }));
	expect(wrong.status).toBe(400);
	const told = [...wrong.text.matchAll(/name="_unsure" value="([^"]+)"/g)].map(([, name]) => name);
	expect(told).toEqual(["change-one", "change-two"]);
	expect((await visitor.post(ask, typed("70"))).status).toBe(409);
	expect((await visitor.post(ask, typed("70", { _unsure: told[0]! }))).status).toBe(303);
	expect((await visitor.get(ask)).text).toMatch(/name="harvested"[^>]*value="70"/);
});

test("whoever may not answer keeps nothing, and forged changes are refused", async () => {
	const mine = await begun();
	const theirs = await begun();
	expect((await mine.visitor.post(theirs.keep, typed("1"))).status).toBe(404);
	expect((await httpVisitor(stack.baseUrl).post(mine.keep, typed("1"))).status).toBe(401);
	expect((await mine.visitor.post(`${mine.address}/keep/causes_none`, typed("1"))).status).toBe(404);
	const forgeries: Record<string, string>[] = [
		{ _seen: "-1" },
		{ _seen: "x" },
		{ _change: "<b>" },
		{ _language: "xx" },
	];
	for (const forged of forgeries) expect((await mine.visitor.post(mine.keep, typed("1", forged))).status).toBe(400);
	expect((await mine.visitor.post(mine.keep, { harvested: "1" })).status).toBe(400);
	expect((await mine.visitor.get(mine.keep)).status).toBeGreaterThanOrEqual(400);
	const answers = "collect.answer join collect.response using (response_id) where survey_id = any($1)";
	expect(await count(owner, answers, [[mine.surveyId, theirs.surveyId]])).toBe(0);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, mine.surveyId));
	expect(await kept(mine.visitor.post(mine.keep, typed("1")))).toMatchObject([200, { kept: true, late: true }]);
	await closeLongAgo(owner, mine.surveyId);
	expect((await mine.visitor.post(mine.keep, typed("2"))).status).toBe(410);
});
