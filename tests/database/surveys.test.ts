import { sql } from "kysely";
import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { countLeftOut, listFrameParts } from "#app/collect/frame-parts.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { changeDraft, discardDraft } from "#app/collect/survey-mending.server.ts";
import { closeSurvey, extendSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { checkDraft, createSurvey, findSurvey, listSurveys } from "#app/collect/surveys.server.ts";
import { addOperation, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();

async function create(viewer: Associate, states: string[], more = {}): Promise<string> {
	const made = await asDesk(viewer, (trx) => createSurvey(trx, viewer, draftOf(states, more)));
	if (!("surveyId" in made) || !made.surveyId) throw new Error(JSON.stringify(made));
	return made.surveyId;
}
const open = (viewer: Associate, surveyId: string) => asDesk(viewer, (trx) => openSurvey(trx, viewer, surveyId));

const moveTo = (zone: string, states: string[]) =>
	owner.query("update directory.state set time_zone = $1 where state_fips = any ($2)", [zone, states]);
/** On whose clock a new survey of these states closes, and what that clock shows then. */
async function closing(states: string[]) {
	const surveyId = await create(both, states, { closesAt: "17:00" });
	const { timeZone, clockStates, closesAt } = (await asDesk(both, (trx) => findSurvey(trx, both, surveyId)))!;
	return [timeZone, clockStates.join(), wallClockOf(closesAt, timeZone).at];
}

describe("a draft", () => {
	test("is refused for a state that is not granted, an unknown crop and a closing time gone by, all at once", async () => {
		const draft = draftOf(["19", "55"], { crops: ["apple", "moonfruit"], closesOn: "2020-01-01" });
		const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draft));
		expect(made).toEqual({
			problems: [
				{ field: "crops", code: "choice_wrong" },
				{ field: "states", code: "choice_wrong" },
				{ field: "closesOn", code: "closing_past" },
			],
		});
	});

	test("tells of whatever could be read of it what is to be mended, where the rest is to be mended too", async () => {
		const read = { titleEn: "Frost", titleEs: undefined, states: ["55"], closesOn: "2020-01-01" };
		const told = await asDesk(iowa, (trx) => checkDraft(trx, iowa, read, new Date()));
		expect(told).toEqual({
			problems: [
				{ field: "titleEs", code: "empty" },
				{ field: "states", code: "choice_wrong" },
				{ field: "closesOn", code: "closing_past" },
			],
		});
	});

	test("closes by the clock of most of its states; of two clocks with as many, by the western one", async () => {
		await moveTo("America/New_York", ["19"]);
		await moveTo("America/Denver", ["55"]);
		expect(await closing(["19"])).toEqual(["America/New_York", "19", "17:00"]);
		expect(await closing(["19", "55"])).toEqual(["America/Denver", "55", "17:00"]);
		await moveTo("America/Chicago", ["19", "55"]);
		expect(await closing(["19", "55"])).toEqual(["America/Chicago", "19,55", "17:00"]);
	});

	test("is seen by associates of one of its states and by no other", async () => {
		const surveyId = await create(both, ["19", "55"]);
		const iowaOnly = await create(iowa, ["19"]);
		const seen = await asDesk(wisconsin, (trx) => listSurveys(trx, wisconsin));
		expect(seen.map((survey) => survey.surveyId)).toContain(surveyId);
		expect(seen.map((survey) => survey.surveyId)).not.toContain(iowaOnly);
		expect(await asDesk(wisconsin, (trx) => findSurvey(trx, wisconsin, iowaOnly))).toBeUndefined();
		expect(await asDesk(wisconsin, (trx) => findSurvey(trx, wisconsin, "1 or 1=1"))).toBeUndefined();
		expect(await count(owner, "collect.survey where survey_id = $1", [iowaOnly])).toBe(1);
	});
});

const change = (viewer: Associate, surveyId: string, more = {}) => {
	const { formKey: _form, ...draft } = draftOf(["19"], more);
	return asDesk(viewer, (trx) => changeDraft(trx, viewer, surveyId, draft));
};
const discard = (viewer: Associate, surveyId: string) => asDesk(viewer, (trx) => discardDraft(trx, viewer, surveyId));

describe("mending a draft", () => {
	test("changes its title, season, crops, states and closing, until it is opened", async () => {
		const surveyId = await create(both, ["19", "55"]);
		const wanted = { titleEn: "Frost", titleEs: "Helada", season: 2032, crops: ["plum", "apple"] };
		expect(await change(iowa, surveyId, wanted)).toBe("states_not_held");
		expect(await change(both, surveyId, { ...wanted, crops: ["moonfruit"], titleEs: "" })).toEqual({
			problems: [
				{ field: "titleEs", code: "empty" },
				{ field: "crops", code: "choice_wrong" },
			],
		});
		expect(await change(both, surveyId, wanted)).toBe("changed");
		expect(await asDesk(both, (trx) => findSurvey(trx, both, surveyId))).toMatchObject({
			title: { en: "Frost", es: "Helada" },
			season: 2032,
			cropKeys: ["plum", "apple"],
			stateFips: ["19"],
		});
		expect(await asDesk(wisconsin, (trx) => findSurvey(trx, wisconsin, surveyId))).toBeUndefined();
		await addOperation(owner, { state: "19" });
		expect(await open(iowa, surveyId)).toBe("opened");
		expect(await change(iowa, surveyId)).toBe("not_a_draft");
		// Not the application either.
		const rob = asDesk(iowa, (trx) =>
			trx.deleteFrom("collect.survey_state").where("survey_id", "=", surveyId).execute(),
		);
		await expect(rob).rejects.toThrow("keeps its states");
	});

	test("throws it away with all that was written of it, and nothing that was opened", async () => {
		const surveyId = await create(both, ["19", "55"]);
		expect(await discard(iowa, surveyId)).toBe("states_not_held");
		expect(await discard(both, surveyId)).toBe("discarded");
		expect(await discard(both, surveyId)).toBe("not_found");
		expect(await count(owner, "collect.survey where survey_id = $1", [surveyId])).toBe(0);
		const opened = await create(iowa, ["19"]);
		await addOperation(owner, { state: "19" });
		await open(iowa, opened);
		expect(await discard(iowa, opened)).toBe("not_a_draft");
		const force = asDesk(iowa, (trx) => sql`select collect.discard_draft(${opened}::uuid)`.execute(trx));
		await expect(force).rejects.toThrow("no draft to throw away");
		expect(await count(owner, "collect.survey where survey_id = $1", [opened])).toBe(1);
	});

	test("shows whom it would ask by state and size, which is whom it asks once opened", async () => {
		for (const trees of [99, 100, 999, 1000]) await addOperation(owner, { state: "19", trees });
		await addOperation(owner, { state: "19", crop: "plum" });
		await addOperation(owner, { state: "19", status: "left" });
		const surveyId = await create(iowa, ["19"]);
		const read = () =>
			asDesk(iowa, async (trx) => {
				const survey = (await findSurvey(trx, iowa, surveyId))!;
				const parts = await listFrameParts(trx, iowa, survey);
				return {
					parts: parts.toSorted((a, b) => a.sizeClass.localeCompare(b.sizeClass)),
					leftOut: await countLeftOut(trx, iowa, survey),
				};
			});
		const { parts, leftOut } = await read();
		expect(parts.map(({ sizeClass }) => sizeClass)).toEqual(["large", "medium", "small"]);
		expect(leftOut).toBeGreaterThan(0);
		await open(iowa, surveyId);
		expect((await read()).parts).toEqual(parts);
	});
});

describe("opening", () => {
	test("freezes the growers who have the crop, with their size and stratum, and leaves the others out", async () => {
		const small = await addOperation(owner, { state: "19", trees: 99 });
		const medium = await addOperation(owner, { state: "19", trees: 100 });
		const large = await addOperation(owner, { state: "55", trees: 1000 });
		const left = await addOperation(owner, { state: "19", status: "left" });
		const pulledOut = await addOperation(owner, { state: "19", removedOn: "2024-05-01" });
		const plums = await addOperation(owner, { state: "19", crop: "plum" });
		const surveyId = await create(both, ["19", "55"]);
		expect(await open(both, surveyId)).toBe("opened");

		const { rows } = await owner.query(
			"select operation_id, stratum_key from collect.frame_operation where survey_id = $1",
			[surveyId],
		);
		const strata = new Map(rows.map((row) => [row.operation_id, row.stratum_key]));
		expect([small, medium, large].map((id) => strata.get(id))).toEqual(["IA-small", "IA-medium", "WI-large"]);
		expect([left, pulledOut, plums].filter((id) => strata.has(id))).toEqual([]);
		const crops = await owner.query(
			"select bearing_trees from collect.frame_crop where survey_id = $1 and operation_id = $2",
			[surveyId, medium],
		);
		expect(crops.rows).toEqual([{ bearing_trees: 100 }]);
	});

	test("twice, also at the same moment, opens once and logs once", async () => {
		await addOperation(owner, { state: "19" });
		const surveyId = await create(iowa, ["19"]);
		const outcomes = await Promise.all([open(iowa, surveyId), open(iowa, surveyId), open(iowa, surveyId)]);
		expect(outcomes.toSorted()).toEqual(["already_open", "already_open", "opened"]);
		expect(await count(owner, "log.event where subject_id = $1 and action = 'survey.opened'", [surveyId])).toBe(1);
	});

	test("keeps the frame as it was when the directory changes afterwards", async () => {
		const operationId = await addOperation(owner, { state: "19", trees: 10 });
		const surveyId = await create(iowa, ["19"]);
		await open(iowa, surveyId);
		await owner.query("update directory.planting set bearing_trees = 5000 where operation_id = $1", [operationId]);
		const late = await addOperation(owner, { state: "19" });
		expect(await open(iowa, surveyId)).toBe("already_open");
		const frame = await owner.query(
			"select size_class from collect.frame_operation where survey_id = $1 and operation_id = $2",
			[surveyId, operationId],
		);
		expect(frame.rows).toEqual([{ size_class: "small" }]);
		expect(await count(owner, "collect.frame_operation where operation_id = $1", [late])).toBe(0);
	});

	test("needs every state of the survey, or growers would be left out without a word", async () => {
		await addOperation(owner, { state: "19" });
		const surveyId = await create(both, ["19", "55"]);
		expect(await open(iowa, surveyId)).toBe("states_not_held");
		expect(await count(owner, "collect.frame_operation where survey_id = $1", [surveyId])).toBe(0);
	});

	test("of a survey that asks about a crop nobody grows stays a draft", async () => {
		await owner.query("insert into directory.crop values ('pawpaw', 5, 'tree', null) on conflict do nothing");
		const surveyId = await create(iowa, ["19"], { crops: ["pawpaw"] });
		expect(await open(iowa, surveyId)).toBe("nobody_in_frame");
		expect((await asDesk(iowa, (trx) => findSurvey(trx, iowa, surveyId)))?.state).toBe("draft");
	});

	test("of another state's survey finds nothing", async () => {
		const surveyId = await create(wisconsin, ["55"]);
		expect(await open(iowa, surveyId)).toBe("not_found");
	});
});

describe("an open survey", () => {
	test("closes once; afterwards its closing time stays where it is", async () => {
		await addOperation(owner, { state: "19" });
		const surveyId = await create(iowa, ["19"]);
		const close = () => asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
		expect(await close()).toBe("not_open");
		await open(iowa, surveyId);
		expect([await close(), await close()]).toEqual(["closed", "already_closed"]);
		const later = new Date(Date.now() + 90 * 86_400_000);
		expect(await asDesk(iowa, (trx) => extendSurvey(trx, iowa, surveyId, later))).toBe("already_closed");
	});

	test("takes its personal links along when its closing time moves", async () => {
		const operationId = await addOperation(owner, { state: "19" });
		const surveyId = await create(iowa, ["19"]);
		await open(iowa, surveyId);
		await owner.query(
			"insert into collect.personal_link (survey_id, operation_id, token_hash, expires_at) values ($1::uuid, $2, ($1::uuid)::text, now())",
			[surveyId, operationId],
		);
		const later = new Date(Date.now() + 90 * 86_400_000);
		expect(await asDesk(iowa, (trx) => extendSurvey(trx, iowa, surveyId, later))).toBe("extended");
		const { rows } = await owner.query("select expires_at from collect.personal_link where survey_id = $1", [surveyId]);
		expect(rows).toEqual([{ expires_at: later }]);
	});

	test("stays closed once its release is drafted, and can be asked on where the draft was sent back", async () => {
		await addOperation(owner, { state: "19" });
		const surveyId = await create(iowa, ["19"]);
		await open(iowa, surveyId);
		await owner.query("update collect.survey set closes_at = now() - interval '1 hour' where survey_id = $1", [
			surveyId,
		]);
		await owner.query(
			`insert into collect.release_draft (survey_id, status, rules, audit, drafted_by)
			values ($1, 'audited', '{}', '{"passed": true}', $2)`,
			[surveyId, iowa.personId],
		);
		const later = new Date(Date.now() + 90 * 86_400_000);
		const extend = () => asDesk(iowa, (trx) => extendSurvey(trx, iowa, surveyId, later));
		const state = async () => (await asDesk(iowa, (trx) => findSurvey(trx, iowa, surveyId)))?.state;
		expect([await extend(), await state()]).toEqual(["already_drafted", "closed"]);
		await owner.query("update collect.release_draft set status = 'rejected' where survey_id = $1", [surveyId]);
		expect([await extend(), await state()]).toEqual(["extended", "open"]);
	});

	test("counts only growers and answers of the viewer's states", async () => {
		await addOperation(owner, { state: "55" });
		const surveyId = await create(both, ["19", "55"]);
		await open(both, surveyId);
		const inFrame = async (viewer: Associate) =>
			(await asDesk(viewer, (trx) => findSurvey(trx, viewer, surveyId)))?.inFrame;
		const inIowa = await count(owner, "collect.frame_operation where survey_id = $1 and state_fips = '19'", [surveyId]);
		const inBoth = await count(owner, "collect.frame_operation where survey_id = $1", [surveyId]);
		expect(inBoth).toBeGreaterThan(inIowa);
		expect(await inFrame(iowa)).toBe(inIowa);
		expect(await inFrame(both)).toBe(inBoth);
	});
});
