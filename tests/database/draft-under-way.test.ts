import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { DraftNotWanted, gapOf, watchDraft } from "#app/jobs/draft-watch.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { cancelDraft, saveDraftProgress } from "#app/release/draft-progress.server.ts";
import { createDraft, findLatestDraft } from "#app/release/drafts.server.ts";
import { listReleaseWork } from "#app/release/release-work.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addAnsweredSurvey } from "./answered-survey-fixture.ts";
import { addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let associate: Associate;
let stranger: Associate;
let surveyId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
	stranger = await addPerson(owner, "Wisconsin's associate", ["55"]);
	surveyId = await addAnsweredSurvey(owner, associate);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function newDraft(): Promise<string> {
	const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	return made.releaseDraftId;
}
const latest = () => asDesk(associate, (trx) => findLatestDraft(trx, associate, surveyId));
const cancel = (viewer: Associate) => asDesk(viewer, (trx) => cancelDraft(trx, viewer, surveyId));
const step = { phase: "choosing", done: 3, total: 8, gap: 0.02 } as const;
const save = (id: string) => scopedTransaction({ kind: "network" }, (trx) => saveDraftProgress(trx, id, step));

test("how far a draft is can be read while it is made", async () => {
	const releaseDraftId = await newDraft();
	expect((await latest())?.progress).toBeNull();
	expect(await save(releaseDraftId)).toBe(true);
	expect(await latest()).toMatchObject({ status: "queued", progress: step });
});

test("a draft is stopped once, by an associate of its states alone, and its job then writes nothing", async () => {
	const releaseDraftId = await newDraft();
	expect(await cancel(stranger)).toEqual({ outcome: "not_under_way" });
	expect((await latest())?.status).toBe("queued");
	expect(await cancel(associate)).toEqual({ outcome: "cancelled", releaseDraftId });
	expect(await cancel(associate)).toEqual({ outcome: "not_under_way" });
	expect(await save(releaseDraftId)).toBe(false);
	await computeReleaseDraft({ releaseDraftId });
	expect(await latest()).toMatchObject({ releaseDraftId, status: "cancelled", audit: null, progress: null });
	const work = await asDesk(associate, (trx) => listReleaseWork(trx, associate));
	expect(work.find((row) => row.surveyId === surveyId)?.work).toBe("none");
});

test("a job that works on a draft learns within seconds that it was stopped", async () => {
	const releaseDraftId = await newDraft();
	await using watch = watchDraft(releaseDraftId, scopedTransaction);
	const stopped = new Promise((resolve) => watch.signal.addEventListener("abort", resolve));
	watch.onProgress({ phase: "auditing", done: 8, total: 8, lost: 10, bound: 10 });
	await expect.poll(async () => (await latest())?.progress, { timeout: 10_000 }).toMatchObject({ phase: "auditing" });
	expect(watch.signal.aborted).toBe(false);
	await cancel(associate);
	await stopped;
	expect(watch.signal.reason).toBeInstanceOf(DraftNotWanted);
}, 20_000);

test("a draft that is made again is told how little it withholds, and nothing of what that adds up to", async () => {
	const releaseDraftId = await newDraft();
	await computeReleaseDraft({ releaseDraftId });
	const draft = await latest();
	expect(draft).toMatchObject({ status: "audited", audit: { passed: true, gap: 0 } });
	expect(Object.keys(draft!.audit!)).not.toContain("lost");
	expect(await cancel(associate)).toEqual({ outcome: "not_under_way" });
});

test("what is lost beyond the least is told in thousandths, upwards", () => {
	expect(gapOf({ lost: 100, bound: 100 })).toBe(0);
	expect(gapOf({ lost: 100, bound: 98.76 })).toBe(0.013);
	expect(gapOf({ lost: Infinity, bound: 5 })).toBeNull();
});
