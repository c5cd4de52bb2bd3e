import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { listDataRows } from "#app/publish/data-file.server.ts";
import { createDraft, findLatestDraft, listDraftCells } from "#app/release/drafts.server.ts";
import { approveDraft } from "#app/release/approval.server.ts";
import { publishRelease } from "#app/release/publish.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { addAnsweredSurvey, countyOwners, harvestedOf, normalOf } from "./answered-survey-fixture.ts";
import { addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

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
	surveyId = await addAnsweredSurvey(owner, associate);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

async function draft(): Promise<string> {
	const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	return made.releaseDraftId;
}
const publish = (viewer: Coordinator, draftId: string) =>
	scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		const approved = await approveDraft(trx, viewer, draftId, new Date());
		return approved.outcome === "scheduled" ? publishRelease(trx, draftId, "test") : approved;
	});

test("an open survey is not drafted, as a later answer could then be told by subtraction", async () => {
	const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
	expect(made).toEqual({ outcome: "not_closed" });
	await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
});

test("a draft shows what may be shown, hides small counties with a shield, and passes its audit", async () => {
	const releaseDraftId = await draft();
	const latest = await asDesk(associate, (trx) => findLatestDraft(trx, associate, surveyId));
	expect(latest).toMatchObject({ releaseDraftId, status: "audited", method: { all: { asked: 23, answered: 23 } } });
	const cells = await asDesk(associate, (trx) => listDraftCells(trx, releaseDraftId));
	const apple = (area: string) => cells.find((cell) => cell.areaKey === area && cell.cropKey === "apple");
	expect(apple("19005")).toMatchObject({ status: "withheld", respondents: null, figures: null });
	expect(apple("19005")?.reasons).toContain("too_few_owners");
	const shields = cells.filter((cell) => cell.cropKey === "apple" && cell.reasons.includes("shield"));
	expect(shields).toHaveLength(1);
	expect(apple("network")?.status).toBe("shown");

	const shown = Object.keys(countyOwners).find((fips) => apple(fips)?.status === "shown") as keyof typeof countyOwners;
	const answers = Array.from({ length: countyOwners[shown] }, (_, i) => i);
	const sum = (of: (i: number) => number) => answers.reduce((total, i) => total + of(i), 0);
	const loss = apple(shown)?.figures?.find((figure) => figure.measureKey === "crop_loss");
	expect(loss?.value).toBeCloseTo(100 * (1 - sum(harvestedOf) / sum(normalOf)), 9);
	expect(loss?.standardError).toBe(0); // everybody was asked and answered
});

test("who drafted cannot approve, a changed draft cannot be approved, and approving twice publishes once", async () => {
	const releaseDraftId = await draft();
	const drafter = { ...associate, role: "coordinator" } as unknown as Coordinator;
	expect(await publish(drafter, releaseDraftId)).toEqual({ outcome: "own_draft" });

	const tampered = `update collect.release_draft_cell set respondents = respondents + 1
		where release_draft_id = $1 and area_key = 'network' and crop_key = 'apple'`;
	await owner.query(tampered, [releaseDraftId]);
	expect(await publish(coordinator, releaseDraftId)).toEqual({ outcome: "changed" });
	await owner.query(tampered.replace("+ 1", "- 1"), [releaseDraftId]);

	const outcomes = await Promise.all([publish(coordinator, releaseDraftId), publish(coordinator, releaseDraftId)]);
	expect(outcomes.map((outcome) => outcome.outcome).toSorted()).toEqual(["not_waiting", "published"]);
	const again = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
	expect(again).toEqual({ outcome: "already_released" });
});

test("published figures are the draft's, rounded; hidden cells have none, whoever asks", async () => {
	const { rows } = await owner.query("select release_id from release.release");
	const published = await listDataRows(rows[0].release_id);
	const hidden = published.filter((row) => row.cellStatus !== "shown");
	expect(hidden.length).toBeGreaterThan(0);
	for (const row of hidden) {
		expect([row.value, row.standardError, row.cv, row.lower, row.upper, row.respondentsBand]).toEqual(
			Array(6).fill(null),
		);
	}
	const region = published.find(
		(row) => row.areaKey === "network" && row.cropKey === "apple" && row.measureKey === "crop_loss",
	);
	const all = Object.values(countyOwners).flatMap((owners) => Array.from({ length: owners }, (_, i) => i));
	const sum = (of: (i: number) => number) => all.reduce((total, i) => total + of(i), 0);
	expect(region?.value).toBe(Math.round(100 * (1 - sum(harvestedOf) / sum(normalOf))));
	expect(region?.respondentsBand).toBe("20-49");
});

test("a release tells a sum of its own, and nothing of the draft that says why cells are withheld", async () => {
	const { rows } = await owner.query(
		`select r.checksum, r.method, r.audit, d.checksum as whole, d.published_checksum as published,
			d.method -> 'joins' as joins, d.audit -> 'shields' as shields
		from release.release r join collect.release_draft d using (release_id)`,
	);
	const [row] = rows;
	expect(row.checksum).toBe(row.published);
	expect(row.checksum).not.toBe(row.whole);
	// The draft has them.
	expect(row.joins).toBeInstanceOf(Array);
	expect(row.shields).toBeGreaterThan(0);
	expect(row.method).toMatchObject({ all: { asked: 23, answered: 23 }, states: [{ stateFips: "19", answered: 23 }] });
	expect(row.method).not.toHaveProperty("joins");
	expect(row.audit).toMatchObject({ passed: true });
	for (const name of ["shields", "withheldForOwnSake", "failures"]) expect(row.audit).not.toHaveProperty(name);
});

test.each(["app", "owner"] as const)("what is published cannot be changed, as %s", async (role) => {
	const client = role === "owner" ? owner : await connectOwner(database.appUrl);
	try {
		for (const statement of [
			"update release.figure set value = 1",
			"update release.cell set status = 'shown', respondents_band = '5-9'",
			"delete from release.figure",
			"update release.release set season = 1999",
			"truncate release.figure",
		]) {
			await expect(client.query(statement)).rejects.toMatchObject({ code: "42501" });
		}
	} finally {
		if (role === "app") await client.end();
	}
});

test("a figure of a withheld cell cannot be stored", async () => {
	await expect(
		owner.query(`insert into release.figure (release_id, measure_key, crop_key, area_key, value, steadiness)
			select release_id, 'yield_per_tree', crop_key, area_key, 1, 'steady' from release.cell where status = 'withheld' limit 1`),
	).rejects.toMatchObject({ code: "23514" });
});
