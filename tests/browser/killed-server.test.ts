import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import {
	addSurvey,
	beginAnswering,
	growerOf,
	pounds,
	stepKeysOf,
	typeStep,
} from "#tests/database/answering-fixture.ts";
import { addOperation, addPerson, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

const growers = 200;
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

/** A grower who has answered everything and not sent it in yet, signed in by the link. */
async function readyToSend(surveyId: string, operationId: string) {
	const place = { surveyId, operationId };
	const grower = growerOf(operationId);
	await beginAnswering(grower, place);
	const typed = { planting: pounds(40, 4000, 1000), causes: { cause_freeze: "100" }, next_year: { bud_set: "normal" } };
	for (const key of await stepKeysOf(grower, place)) {
		const values = typed[key.replace(/-.*/, "") as keyof typeof typed];
		if (values) expect(await typeStep(grower, place, key, values)).toBe("saved");
	}
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) => createPersonalLink(trx, { ...place, expiresAt }));
	const visitor = httpVisitor(stack.baseUrl);
	expect((await visitor.post(`/r/${token}`, {})).status).toBe(303);
	const review = `/answer/${surveyId}/${operationId}/review`;
	return { operationId, send: () => visitor.post(review, {}) };
}

/** Ten at a time: one by one most of the time would be waited, and all at once would be turned away. */
async function inTens<T, R>(all: readonly T[], work: (one: T) => Promise<R>): Promise<R[]> {
	const done: R[] = [];
	for (let at = 0; at < all.length; at += 10) done.push(...(await Promise.all(all.slice(at, at + 10).map(work))));
	return done;
}

/** How often each operation's answers are there, and how many receipts go out for them. */
async function listSent(surveyId: string): Promise<Map<string, [submissions: number, receipts: number]>> {
	const { rows } = await owner.query(
		`select r.operation_id, count(distinct b.version)::int as submissions, count(distinct m.mailing_id)::int as receipts
		from collect.response r join collect.submission b using (response_id)
		left join collect.mailing m on m.survey_id = r.survey_id and m.operation_id = r.operation_id and m.kind = 'receipt'
		where r.survey_id = $1 group by 1`,
		[surveyId],
	);
	return new Map(rows.map(({ operation_id, submissions, receipts }) => [operation_id, [submissions, receipts]]));
}

test("a server killed while 200 growers send in loses none that it confirmed, and doubles none", async () => {
	const operationIds: string[] = [];
	for (let i = 0; i < growers; i++) operationIds.push(await addOperation(owner, { state: "19", name: `Orchard ${i}` }));
	const surveyId = await addSurvey(associate, true, new Date().getFullYear());
	const ready = await inTens(operationIds, (operationId) => readyToSend(surveyId, operationId));

	const confirmed = new Set<string>();
	let killed: Promise<void> | undefined;
	await Promise.all(
		ready.map(async ({ operationId, send }) => {
			const answer = await send().catch(() => null);
			// Turned away for want of a free connection, it was not confirmed either.
			if (!answer || answer.status === 503) return;
			expect(answer).toMatchObject({ status: 303, location: expect.stringMatching(/\/receipt$/) });
			confirmed.add(operationId);
			// The rest is under way: queued, half written, or written and not confirmed.
			if (confirmed.size === 30) killed = stack.kill("server");
		}),
	);
	await killed;
	expect(confirmed.size).toBeGreaterThanOrEqual(30);
	expect(confirmed.size).toBeLessThan(growers);
	const before = await listSent(surveyId);
	expect([...confirmed].filter((operationId) => !before.has(operationId))).toEqual([]);

	await stack.start("server");
	for (const { location } of await inTens(ready, ({ send }) => send())) expect(location).toMatch(/\/receipt$/);
	const after = await listSent(surveyId);
	expect(after.size).toBe(growers);
	expect([...after.values()].filter((counts) => counts.some((count) => count !== 1))).toEqual([]);
	const { rows } = await owner.query(
		"select count(*)::int as facts, count(distinct operation_id)::int as of from collect.fact where survey_id = $1 and measure_key = 'base.harvested_lb' and crop_key = 'apple'",
		[surveyId],
	);
	expect(rows).toEqual([{ facts: growers, of: growers }]);
});
