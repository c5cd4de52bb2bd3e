import { sql } from "kysely";
import type { Client } from "pg";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import type { FormDefinition } from "#app/collect/form.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { type Decided, decideRelease } from "#app/jobs/decide-release.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { publishAtItsMinute } from "#app/jobs/publish-release.server.ts";
import { findAskedForm } from "#app/publish/asked-form.server.ts";
import { listDataRows } from "#app/publish/data-file.server.ts";
import { findReleaseById, listEditions, listReleases } from "#app/publish/releases.server.ts";
import type { Decision } from "#app/release/decision.schema.ts";
import { createDraft, findDraft } from "#app/release/drafts.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addAnsweredSurvey } from "./answered-survey-fixture.ts";
import { addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

// A release from its approval on: published at its minute, revised in the open, withdrawn.

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let associate: Associate;
let coordinator: Coordinator;
let surveyId: string;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});
beforeEach(async () => {
	surveyId = await addAnsweredSurvey(owner, associate);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
});

const reason = { en: "Two answers were corrected.", es: "Se corrigieron dos respuestas." };
const now = () => new Date();

async function draft(why: typeof reason | null = null): Promise<string> {
	const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules, why));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	return made.releaseDraftId;
}

function decide(draftId: string, decision: Decision, viewer = coordinator, at = now()): Promise<Decided> {
	return scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		const found = await findDraft(trx, viewer, draftId);
		if (!found) throw new Error("no draft");
		return decideRelease(trx, viewer, found, decision, at);
	});
}

async function statusOf(draftId: string): Promise<string> {
	const { rows } = await owner.query("select status from collect.release_draft where release_draft_id = $1", [draftId]);
	return rows[0].status as string;
}

/** As the application, which alone reads the queue. */
const jobsNamed = (key: string) =>
	scopedTransaction({ kind: "none" }, async (trx) => {
		const { rows } = await sql<{ run_at: Date }>`select run_at from graphile_worker._private_jobs
			where key = ${key}`.execute(trx);
		return rows;
	});
const jobsOf = (draftId: string) => jobsNamed(`publish_release:${draftId}`);

test("a draft approved for a minute to come is published by its job, then and not before", async () => {
	const draftId = await draft();
	const set = { decision: "schedule", publishOn: "2027-05-03", publishAt: "08:00" } as const;
	expect(await decide(draftId, set, coordinator, new Date("2027-05-01T00:00:00Z"))).toEqual({ done: "scheduled" });
	// Eight in the morning in Iowa's summer time.
	expect(await jobsOf(draftId)).toMatchObject([{ run_at: new Date("2027-05-03T13:00:00Z") }]);
	await expect(publishAtItsMinute({ releaseDraftId: draftId })).rejects.toThrow("not_yet");
	expect(await findReleaseById(draftId)).toBeUndefined();

	await owner.query("update collect.release_draft set publish_at = now() where release_draft_id = $1", [draftId]);
	await publishAtItsMinute({ releaseDraftId: draftId });
	await publishAtItsMinute({ releaseDraftId: draftId }); // a job that runs twice publishes once
	expect(await findReleaseById(draftId)).toMatchObject({ edition: 1, replacedBy: null, withdrawn: null });
	const { rows } = await owner.query("select person_id, action from log.event where subject_id = $1", [draftId]);
	expect(rows.map(({ action }) => action)).toEqual(["release.scheduled", "release.published"]);
	expect(rows.every(({ person_id }) => person_id === coordinator.personId)).toBe(true);
});

test("an approval is taken back before its minute, and its job with it", async () => {
	const draftId = await draft();
	await decide(
		draftId,
		{ decision: "schedule", publishOn: "2099-05-03", publishAt: "08:00" },
		coordinator,
		new Date("2099-05-01"),
	);
	expect(await decide(draftId, { decision: "unschedule" })).toEqual({ done: "unscheduled" });
	expect(await jobsOf(draftId)).toEqual([]);
	expect(await statusOf(draftId)).toBe("audited");
	await publishAtItsMinute({ releaseDraftId: draftId });
	expect(await findReleaseById(draftId)).toBeUndefined();
	expect(await decide(draftId, { decision: "unschedule" })).toEqual({ refused: "not_scheduled" });
});

test.each([
	["2020-01-01", "08:00", "closing_past"],
	["2099-01-01", "08:00", "closing_far"],
	["2027-02-30", "08:00", "date_wrong"],
])("a minute like %s %s is refused beside its field", async (publishOn, publishAt, code) => {
	const draftId = await draft();
	const decided = await decide(draftId, { decision: "schedule", publishOn, publishAt });
	expect(decided).toEqual({ problem: { field: "publishOn", code } });
	expect(await statusOf(draftId)).toBe("audited");
});

test("who drafted can neither schedule nor publish", async () => {
	const draftId = await draft();
	const drafter = { ...associate, role: "coordinator" } as unknown as Coordinator;
	const set = { decision: "schedule", publishOn: "2099-05-03", publishAt: "08:00" } as const;
	expect(await decide(draftId, set, drafter, new Date("2099-05-01"))).toEqual({ refused: "own_draft" });
	expect(await decide(draftId, { decision: "publish" }, drafter)).toEqual({ refused: "own_draft" });
});

test("a draft that a newer one replaces is not published at its minute", async () => {
	const draftId = await draft();
	await decide(
		draftId,
		{ decision: "schedule", publishOn: "2099-05-03", publishAt: "08:00" },
		coordinator,
		new Date("2099-05-01"),
	);
	const newer = await draft();
	expect(await statusOf(draftId)).toBe("superseded");
	await publishAtItsMinute({ releaseDraftId: draftId });
	expect(await findReleaseById(draftId)).toBeUndefined();
	expect(await decide(newer, { decision: "publish" })).toMatchObject({ done: "published" });
});

test("a revision needs a release and a reason, replaces it in the open, and the old one keeps its address", async () => {
	const make = (why: typeof reason | null) =>
		asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules, why));
	expect(await make(reason)).toEqual({ outcome: "not_released" });
	const first = await draft();
	await decide(first, { decision: "publish" });
	expect(await make(null)).toEqual({ outcome: "already_released" });

	const second = await draft(reason);
	expect(await jobsNamed(`tell_followers:${second}:revised`)).toEqual([]);
	expect(await decide(second, { decision: "publish" })).toMatchObject({ done: "published" });
	expect(await jobsNamed(`tell_followers:${second}:revised`)).toHaveLength(1);
	const [newest, oldest] = await listEditions(surveyId);
	expect(newest).toMatchObject({ releaseId: second, edition: 2, revisionReason: reason, replacedBy: null });
	expect(oldest).toMatchObject({ releaseId: first, edition: 1, revisionReason: null, replacedBy: newest!.number });
	const standing = (await listReleases()).map(({ releaseId }) => releaseId);
	expect(standing).toContain(second);
	expect(standing).not.toContain(first);
	expect((await listDataRows(first)).some(({ value }) => value !== null)).toBe(true);
});

test("a revision tells of the areas of the release before it, though the districts were redrawn since", async () => {
	const first = await draft();
	await decide(first, { decision: "publish" });
	await owner.query("insert into directory.district values ('IA-U', '19', 'Redrawn') on conflict do nothing");
	await owner.query("update directory.county set district_key = 'IA-U' where county_fips in ('19001', '19005')");
	const second = await draft(reason);
	const { rows } = await owner.query(
		"select area_key, status from collect.release_draft_cell where release_draft_id = $1 and area_key in ('IA-T', 'IA-U') and crop_key = 'apple'",
		[second],
	);
	expect(rows).toEqual([{ area_key: "IA-T", status: "shown" }]);
	expect(await statusOf(second)).toBe("audited");
	expect(await decide(second, { decision: "publish" })).toMatchObject({ done: "published" });
});

test("a release keeps the questions as they stood when it came out, in both languages and without what is counted of them", async () => {
	const first = await draft();
	await decide(first, { decision: "publish" });
	const kept = await findAskedForm(first);
	await owner.query(
		`update collect.form_version set definition = jsonb_set(definition, '{title,en}', '"Worded anew"')
		where form_version_id = (select form_version_id from collect.survey where survey_id = $1)`,
		[surveyId],
	);
	expect(await findAskedForm(first)).toEqual(kept);
	const asked = kept?.form.screens.flatMap(({ questions }) => questions) ?? [];
	const { rows } = await owner.query<{ definition: FormDefinition }>(
		"select v.definition from collect.survey join collect.form_version v using (form_version_id) where survey_id = $1",
		[surveyId],
	);
	const form = rows[0]!.definition;
	expect(form.title.en).toBe("Worded anew");
	const questions = form.screens.flatMap((screen) => screen.questions);
	expect(asked.map(({ key, text, help }) => ({ key, text, help }))).toEqual(
		questions.map(({ key, text, help }) => ({ key, text, help })),
	);
	expect(Object.keys(kept?.form ?? {})).not.toContain("measures");
});

test("a withdrawn release serves no figure and keeps its address; a revision can follow", async () => {
	const first = await draft();
	await decide(first, { decision: "publish" });
	const shown = async () => (await listDataRows(first)).filter(({ value }) => value !== null).length;
	expect(await shown()).toBeGreaterThan(0);
	const withdraw = {
		decision: "withdraw",
		reasonEn: "A county was wrong.",
		reasonEs: "Un condado estaba mal.",
	} as const;
	expect(await decide(first, withdraw)).toMatchObject({ done: "withdrawn" });
	expect(await decide(first, withdraw)).toEqual({ refused: "already_withdrawn" });
	expect(await jobsNamed(`tell_followers:${first}:withdrawn`)).toHaveLength(1);

	expect(await shown()).toBe(0);
	expect(await findReleaseById(first)).toMatchObject({
		withdrawn: { reason: { en: "A county was wrong.", es: "Un condado estaba mal." } },
	});
	expect((await listReleases()).map(({ releaseId }) => releaseId)).not.toContain(first);
	const kept = await owner.query("select from release.figure where release_id = $1 and value is not null", [first]);
	expect(kept.rowCount).toBeGreaterThan(0); // kept for the record, and out of the reader's sight

	const second = await draft(reason);
	await decide(second, { decision: "publish" });
	expect(await findReleaseById(second)).toMatchObject({ edition: 2, withdrawn: null });
});

test("of two drafts made at once in one season the second is refused, and made again it is held against the first", async () => {
	const late = await draft();
	const lateSurvey = surveyId;
	surveyId = await addAnsweredSurvey(owner, associate);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
	const early = await draft();
	expect(await decide(early, { decision: "publish" })).toMatchObject({ done: "published" });

	expect(await decide(late, { decision: "publish" })).toEqual({ refused: "outdated" });
	const set = { decision: "schedule", publishOn: "2099-05-03", publishAt: "08:00" } as const;
	expect(await decide(late, set, coordinator, new Date("2099-05-01"))).toEqual({ refused: "outdated" });
	expect(await statusOf(late)).toBe("audited");

	surveyId = lateSurvey;
	const again = await draft();
	const { rows } = await owner.query("select audit from collect.release_draft where release_draft_id = $1", [again]);
	expect(rows[0].audit.heldAgainst).toContain(early);
	expect(await decide(again, { decision: "publish" })).toMatchObject({ done: "published" });
	const release = await owner.query("select audit from release.release where release_id = $1", [again]);
	expect(Object.keys(release.rows[0].audit)).not.toContain("heldAgainst");
});
