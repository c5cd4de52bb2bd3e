import { expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import type { Brief } from "#app/collect/brief.ts";
import { findBrief, saveBrief } from "#app/collect/brief.server.ts";
import { listBarSurveys } from "#app/collect/season-bar.server.ts";
import { archiveSurvey, copySurvey } from "#app/collect/survey-life.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey, findSurvey, listSurveys } from "#app/collect/surveys.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { approveDraft } from "#app/release/approval.server.ts";
import { createDraft } from "#app/release/drafts.server.ts";
import { publishRelease } from "#app/release/publish.server.ts";
import { readPlanKept } from "#app/routes/desk/parts/brief/plan-kept.server.ts";
import { addAnsweredSurvey } from "./answered-survey-fixture.ts";
import { asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, both, wisconsin } = await openSurveysDatabase();

const planned = { measureKey: "crop_loss", cropKey: "apple", level: "county", smallestN: 7, largestCv: 0.3 } as const;
const brief: Brief = {
	why: "A hard freeze on May 4.",
	askedBy: "The growers' association",
	decision: "Whether to ask for relief.",
	planned: [planned],
	version: 0,
};
const save = (viewer: Associate, surveyId: string, more: Partial<Brief> = {}) =>
	asDesk(viewer, (trx) => saveBrief(trx, viewer, surveyId, { ...brief, ...more }));
const find = (viewer: Associate, surveyId: string) => asDesk(viewer, (trx) => findBrief(trx, viewer, surveyId));
async function makeSurvey(viewer: Associate, states: string[]): Promise<string> {
	const made = await asDesk(viewer, (trx) => createSurvey(trx, viewer, draftOf(states)));
	if (!("surveyId" in made) || !made.surveyId) throw new Error("no survey");
	return made.surveyId;
}
const copy = (viewer: Associate, surveyId: string) => asDesk(viewer, (trx) => copySurvey(trx, viewer, surveyId));

test("a brief is kept, and what somebody else wrote meanwhile is not written over", async () => {
	const surveyId = await makeSurvey(iowa, ["19"]);
	expect(await find(iowa, surveyId)).toEqual({ ...brief, why: "", askedBy: "", decision: "", planned: [], version: 0 });
	expect(await save(iowa, surveyId)).toBe("saved");
	expect(await find(both, surveyId)).toEqual({ ...brief, version: 1 });
	expect(await save(both, surveyId, { why: "Hail.", version: 1 })).toBe("saved");
	expect(await save(iowa, surveyId, { why: "Drought.", version: 1 })).toBe("changed_meanwhile");
	expect(await save(iowa, surveyId, { why: "Drought." })).toBe("changed_meanwhile");
	expect((await find(iowa, surveyId))?.why).toBe("Hail.");
});

test("another state's brief is not found, and the database shows no row of it", async () => {
	const surveyId = await makeSurvey(iowa, ["19"]);
	await save(iowa, surveyId);
	expect(await find(wisconsin, surveyId)).toBeUndefined();
	expect(await save(wisconsin, surveyId, { version: 1 })).toBe("not_found");
	const rows = (viewer: Associate) =>
		asDesk(viewer, (trx) =>
			trx.selectFrom("collect.survey_brief").select("why").where("survey_id", "=", surveyId).execute(),
		);
	expect(await rows(iowa)).toHaveLength(1);
	expect(await rows(wisconsin)).toEqual([]);
});

test("next season's copy takes form, crops and brief over, once, in the states that its maker holds", async () => {
	const surveyId = await makeSurvey(both, ["19", "55"]);
	await save(both, surveyId);
	const made = await copy(iowa, surveyId);
	if (typeof made !== "object") throw new Error(made);
	expect(await copy(iowa, surveyId)).toEqual(made);
	const [before, after] = await asDesk(iowa, async (trx) => [
		await findSurvey(trx, iowa, surveyId),
		await findSurvey(trx, iowa, made.surveyId),
	]);
	expect(after).toMatchObject({
		season: before!.season + 1,
		title: before!.title,
		cropKeys: before!.cropKeys,
		stateFips: ["19"],
		state: "draft",
		inFrame: 0,
	});
	expect(after!.closesAt.getTime()).toBeGreaterThan(before!.closesAt.getTime() + 300 * 86_400_000);
	expect(await find(iowa, made.surveyId)).toEqual({ ...brief, version: 1 });
	const other = await copy(both, surveyId);
	expect(other).not.toEqual(made);
	const otherState = await makeSurvey(wisconsin, ["55"]);
	expect(await copy(iowa, otherState)).toBe("not_found");
});

test("a closed survey is put aside and taken out again, and an open one is not", async () => {
	const surveyId = await addAnsweredSurvey(owner, iowa);
	const aside = (value: boolean, viewer = iowa) => asDesk(viewer, (trx) => archiveSurvey(trx, viewer, surveyId, value));
	expect(await aside(true)).toBe("not_closed");
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
	expect(await aside(true, wisconsin)).toBe("not_found");
	const listed = async (archived: boolean) =>
		(await asDesk(iowa, (trx) => listSurveys(trx, iowa, { archived }))).some((one) => one.surveyId === surveyId);
	const inBar = async () =>
		(await asDesk(iowa, (trx) => listBarSurveys(trx, iowa))).some((one) => one.surveyId === surveyId);
	expect([await listed(false), await listed(true), await inBar()]).toEqual([true, false, true]);
	expect(await aside(true)).toBe("archived");
	expect(await aside(true)).toBe("unchanged");
	expect([await listed(false), await listed(true), await inBar()]).toEqual([false, true, false]);
	expect(await aside(false)).toBe("taken_out");
	expect([await listed(false), await inBar()]).toEqual([true, true]);
});

test("what was planned is held against what the newest release tells", async () => {
	const surveyId = await addAnsweredSurvey(owner, iowa);
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
	const kept = () => asDesk(iowa, (trx) => readPlanKept(trx, surveyId, [planned, { ...planned, smallestN: 8 }]));
	expect(await kept()).toBeNull();
	const made = await asDesk(iowa, (trx) => createDraft(trx, iowa, surveyId, networkRules));
	if (made.outcome !== "drafted") throw new Error(made.outcome);
	await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
	const coordinator = { ...wisconsin, role: "coordinator" } as unknown as Coordinator;
	await scopedTransaction({ kind: "desk", stateFips: [] }, async (trx) => {
		await approveDraft(trx, coordinator, made.releaseDraftId, new Date());
		await publishRelease(trx, made.releaseDraftId, "test");
	});
	// Four counties have growers: 8, 7, 2 and 6. The one of two is withheld, and one more as its shield.
	const held = await kept();
	const { rows } = await owner.query(
		`select respondents from collect.release_draft_cell where release_draft_id = $1 and crop_key = 'apple'
		and status = 'shown' and area_key in ('19001', '19003', '19005', '19007')`,
		[made.releaseDraftId],
	);
	const counts = rows.map(({ respondents }) => Number(respondents));
	expect(counts).toHaveLength(2);
	expect(held?.kept).toEqual([
		{ areas: 4, told: 2, asPlanned: counts.filter((n) => n >= 7).length },
		{ areas: 4, told: 2, asPlanned: counts.filter((n) => n >= 8).length },
	]);
});

const makeTitled = (titles: { titleEn?: string; titleEs?: string }) =>
	asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"], { titleEn: "", titleEs: "", ...titles })));

test("a title in one language alone is refused beside the other's field", async () => {
	expect(await makeTitled({ titleEn: "Frost" })).toEqual({ problems: [{ field: "titleEs", code: "empty" }] });
	expect(await makeTitled({ titleEs: "Helada" })).toEqual({ problems: [{ field: "titleEn", code: "empty" }] });
	expect(await makeTitled({})).toMatchObject({ surveyId: expect.any(String) });
});
