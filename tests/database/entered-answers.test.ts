import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "#app/collect/answer-place.server.ts";
import { canEnter, enterAnswers, findEntry, type NewEntry } from "#app/collect/entered-answers.server.ts";
import { keepEntryDraft, listEntryDrafts } from "#app/collect/entry-drafts.server.ts";
import { PaperQuery } from "#app/collect/paper-forms.schema.ts";
import { listPaperAreas, listPaperForms } from "#app/collect/paper-forms.server.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { readEntry } from "#app/collect/read-entry.ts";
import { findResponse } from "#app/collect/response-view.server.ts";
import { versionOf } from "#app/collect/step-change.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { paperSheets } from "#app/routes/desk/parts/paper/paper-sheet.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, askGrower, closeLongAgo, countJobs, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let colleague: Associate;
let wisconsin: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	colleague = await addPerson(owner, "Another of Iowa", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const entryOf = (viewer: Associate, place: AnswerPlace) => asDesk(viewer, (trx) => findEntry(trx, viewer, place));

/** Types the whole form and sends it in, as the page does. */
async function enter(viewer: Associate, place: AnswerPlace, typed: StepValues, more: Partial<NewEntry> = {}) {
	return asDesk(viewer, async (trx) => {
		const entry = await findEntry(trx, viewer, place);
		if (!entry) return "not_found" as const;
		const settings = { language: "en", season: entry.season, today: `${entry.season}-12-01` } as const;
		const { answers, problems } = readEntry(entry, typed, settings);
		if (problems.length > 0) throw new Error(problems.map(({ field, code }) => `${field}: ${code}`).join());
		const seen = entry.response?.submittedVersion ?? 0;
		return enterAnswers(trx, viewer, place, {
			answers,
			language: "en",
			mode: "telephone",
			seen,
			allTheSame: false,
			...more,
		});
	});
}

const typedFor = (step: string, trees: number, normal: number, picked: number, note = ""): StepValues => ({
	...Object.fromEntries(Object.entries(pounds(trees, normal, picked)).map(([key, text]) => [`${step}.${key}`, text])),
	"next_year.comment": note,
});

async function submissionsOf({ surveyId, operationId }: AnswerPlace) {
	const { rows } = await owner.query(
		`select b.version, b.mode, b.entered_by, b.late, b.answers from collect.submission b
		join collect.response r using (response_id) where r.survey_id = $1 and r.operation_id = $2 order by 1`,
		[surveyId, operationId],
	);
	return rows;
}

async function factsOf({ surveyId, operationId }: AnswerPlace): Promise<Record<string, number>> {
	const { rows } = await owner.query(
		"select measure_key, y from collect.fact where survey_id = $1 and operation_id = $2 and crop_key = 'apple' and y is not null",
		[surveyId, operationId],
	);
	return Object.fromEntries(rows.map(({ measure_key, y }) => [measure_key, y]));
}

describe("an answer taken by telephone", () => {
	test("is one answer like any other, marked with how it came and who typed it, under the pledge", async () => {
		const { place, step, grower } = await askGrower(owner, iowa, { begin: false });
		const jobs = await countJobs();
		expect(await enter(iowa, place, typedFor(step, 40, 4000, 4000, "by the river"))).toMatchObject({
			outcome: "submitted",
			version: 1,
		});
		expect(await submissionsOf(place)).toMatchObject([
			{ version: 1, mode: "telephone", entered_by: iowa.personId, late: false },
		]);
		const { rows } = await owner.query(
			`select r.mode, r.pledge_version, f.disposition from collect.response r
			join collect.frame_operation f using (survey_id, operation_id) where r.survey_id = $1`,
			[place.surveyId],
		);
		expect(rows).toEqual([{ mode: "telephone", pledge_version: "2026-1", disposition: "complete" }]);
		expect(await countJobs()).toBeGreaterThan(jobs);
		expect(
			await count(
				owner,
				`log.event where action = 'response.submitted' and person_id = $1 and detail ->> 'mode' = 'telephone'`,
				[iowa.personId],
			),
		).toBeGreaterThan(0);

		// The same facts as on the grower's own way.
		const other = await askGrower(owner, iowa);
		await typeStep(other.grower, other.place, other.step, pounds(40, 4000, 4000));
		await submit(other.grower, other.place);
		expect(await factsOf(place)).toEqual(await factsOf(other.place));
		expect(Object.keys(await factsOf(place)).length).toBeGreaterThan(3);

		const shown = await asDesk(iowa, async (trx) => {
			const { response } = await answeringOf(grower, place);
			return findResponse(trx, iowa, { surveyId: place.surveyId, responseId: response!.responseId });
		});
		expect(shown!.submissions).toMatchObject([{ mode: "telephone", enteredBy: "Iowa's associate" }]);
	});

	test("can be amended by its grower, who finds what was typed", async () => {
		const { place, step, grower } = await askGrower(owner, iowa, { begin: false });
		await enter(iowa, place, typedFor(step, 40, 4000, 4000));
		const found = await answeringOf(grower, place);
		expect(found.response!.changedSinceSubmission).toBe(false);
		expect(found.answers.find(({ questionKey }) => questionKey === "harvested")!.value).toBe(4000);
		await typeStep(grower, place, step, pounds(40, 4000, 3900));
		await typeStep(grower, place, "causes", { screen_kind: "dont_know" });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted", version: 2 });
		expect((await submissionsOf(place)).map(({ mode }) => mode)).toEqual(["telephone", "web"]);
	});

	test("sent twice, by a double tap, is one answer", async () => {
		const { place, step } = await askGrower(owner, iowa, { begin: false });
		const typed = typedFor(step, 40, 4000, 4000);
		await enter(iowa, place, typed, { seen: 0 });
		expect(await enter(iowa, place, typed, { seen: 0, allTheSame: true })).toMatchObject({ outcome: "unchanged" });
		expect(await submissionsOf(place)).toHaveLength(1);
	});

	test("that lacks what is required begins nothing", async () => {
		const { place } = await askGrower(owner, iowa, { begin: false });
		const entry = { answers: [], language: "en", mode: "paper", seen: 0, allTheSame: false } as const;
		expect(await asDesk(iowa, (trx) => enterAnswers(trx, iowa, place, { ...entry, answers: [] }))).toMatchObject({
			outcome: "unfinished",
		});
		expect(await count(owner, "collect.response where survey_id = $1", [place.surveyId])).toBe(0);
	});

	test("cannot be typed in for another state's operation: it is not found", async () => {
		const { place, step } = await askGrower(owner, iowa, { begin: false });
		expect(await count(owner, "collect.frame_operation where survey_id = $1", [place.surveyId])).toBeGreaterThan(0);
		expect(await entryOf(wisconsin, place)).toBeUndefined();
		expect(await enter(wisconsin, place, typedFor(step, 40, 4000, 4000))).toBe("not_found");
		const entry = { answers: [], language: "en", mode: "paper", seen: 0, allTheSame: false } as const;
		expect(await asDesk(wisconsin, (trx) => enterAnswers(trx, wisconsin, place, { ...entry, answers: [] }))).toBe(
			"not_found",
		);
		expect(await submissionsOf(place)).toEqual([]);
	});

	test("is refused once the survey has closed and nothing was begun", async () => {
		const { place, step } = await askGrower(owner, iowa, { begin: false });
		const offered = (viewer: Associate) => asDesk(viewer, (trx) => canEnter(trx, viewer, place));
		expect([await offered(iowa), await offered(wisconsin)]).toEqual([true, false]);
		await asDesk(iowa, (trx) => closeSurvey(trx, iowa, place.surveyId));
		await closeLongAgo(owner, place.surveyId);
		expect(await offered(iowa)).toBe(false);
		expect(await enter(iowa, place, typedFor(step, 40, 4000, 4000))).toBe("closed");
		expect(await submissionsOf(place)).toEqual([]);
	});
});

describe("two at once", () => {
	test("what the grower sent in meanwhile is not written over; sent all the same, both versions stay", async () => {
		const { place, step, grower } = await askGrower(owner, iowa);
		const typed = typedFor(step, 40, 4000, 4000);
		await asDesk(iowa, (trx) => keepEntryDraft(trx, iowa, place, { mode: "telephone", typed }));
		await typeStep(grower, place, step, pounds(40, 4100, 4100));
		await submit(grower, place);

		expect(await enter(iowa, place, typed, { seen: 0 })).toBe("answered_meanwhile");
		expect(await factsOf(place)).toMatchObject({ "base.harvested_lb": 4100 });
		const entry = await entryOf(iowa, place);
		expect(entry!.draft!.typed).toEqual(typed);
		expect(entry!.response).toMatchObject({ submittedVersion: 1, keepsUnsent: false });

		expect(await enter(iowa, place, typed, { seen: 0, allTheSame: true })).toMatchObject({ version: 2 });
		expect(await factsOf(place)).toMatchObject({ "base.harvested_lb": 4000 });
		const harvested = (await submissionsOf(place)).map(
			({ answers }) => answers.answers.find((one: { questionKey: string }) => one.questionKey === "harvested").value,
		);
		expect(harvested).toEqual([4100, 4000]);
		expect((await entryOf(iowa, place))!.draft).toBeNull();
	});

	test("what the grower keeps and has not sent in stays the grower's: not shown, and not lost", async () => {
		const { place, step, grower } = await askGrower(owner, iowa);
		await typeStep(grower, place, step, pounds(41, 4100, 4100));
		const entry = await entryOf(iowa, place);
		expect(entry!.response).toMatchObject({ submittedVersion: 0, keepsUnsent: true });
		expect(entry!.sent).toEqual([]);
		expect(JSON.stringify(entry)).not.toContain("4100");

		expect(await enter(iowa, place, typedFor(step, 40, 4000, 4000, "told on the phone"))).toMatchObject({ version: 1 });
		expect(await factsOf(place)).toMatchObject({ "base.harvested_lb": 4000 });
		const found = await answeringOf(grower, place);
		expect(found.answers.find(({ questionKey }) => questionKey === "harvested")!.value).toBe(4100);
		expect(found.answers.find(({ questionKey }) => questionKey === "comment")!.value).toBe("told on the phone");
		expect(found.response!.changedSinceSubmission).toBe(true);
	});

	test("a page that the grower has open learns that its step was changed", async () => {
		const { place, step, grower } = await askGrower(owner, iowa);
		const before = (await answeringOf(grower, place)).response!.stepChanges;
		await enter(iowa, place, typedFor(step, 40, 4000, 4000));
		const after = (await answeringOf(grower, place)).response!.stepChanges;
		expect([versionOf(before, step), versionOf(after, step)]).toEqual([0, 1]);
		expect(versionOf(after, "harvest_days")).toBe(0);
	});
});

describe("an entry that was interrupted", () => {
	test("is kept as it was typed, for the associate alone; others are told that it was begun, and by whom", async () => {
		const { place, step } = await askGrower(owner, iowa, { begin: false });
		const typed = { [`${step}.harvested`]: "12 or so bu", mode: "paper" };
		await asDesk(iowa, (trx) => keepEntryDraft(trx, iowa, place, { mode: "paper", typed: { mode: "paper" } }));
		await asDesk(iowa, (trx) => keepEntryDraft(trx, iowa, place, { mode: "paper", typed }));
		expect((await entryOf(iowa, place))!.draft!.typed).toEqual(typed);
		const theirs = await entryOf(colleague, place);
		expect(theirs!.draft).toBeNull();
		expect(theirs!.others).toMatchObject([{ personName: "Iowa's associate" }]);
		expect(JSON.stringify(theirs)).not.toContain("or so bu");
		expect(await asDesk(iowa, (trx) => listEntryDrafts(trx, iowa, place.surveyId))).toMatchObject([
			{ operationId: place.operationId },
		]);
		expect(await asDesk(colleague, (trx) => listEntryDrafts(trx, colleague, place.surveyId))).toEqual([]);
		// It counts as nothing, and begins nothing for the grower.
		expect(await count(owner, "collect.response where survey_id = $1", [place.surveyId])).toBe(0);
	});
});

const papersOf = (viewer: Associate, place: Partial<AnswerPlace> & { surveyId: string }, query = {}) =>
	asDesk(viewer, async (trx) => {
		const asked = PaperQuery.parse(query);
		const papers = await listPaperForms(trx, viewer, place, asked);
		return papers && { ...papers, sheets: await paperSheets(papers, asked) };
	});

describe("a paper form", () => {
	test("has the operation's own plantings, the promise and a number by which it is found", async () => {
		const { place, plantingIds } = await askGrower(owner, iowa, {
			begin: false,
			name: "Heron Slope Orchard",
			trees: 77,
			more: [{ crop: "plum", cultivar: "Mount Royal", trees: 12 }],
		});
		const papers = await papersOf(iowa, place);
		const [sheet, ...others] = papers!.sheets;
		expect(others).toEqual([]);
		expect(sheet!.lines).toContain("Heron Slope Orchard");
		expect(sheet!.number).toContain(place.operationId.slice(0, 8).toUpperCase());
		expect(sheet!.pledge.lines).toHaveLength(5);
		const plantings = sheet!.steps.filter(({ key }) => key.startsWith("planting-"));
		expect(plantings.map(({ key }) => key)).toEqual(plantingIds.map((id) => `planting-${id}`));
		expect(plantings[1]!.title).toContain("Mount Royal");
		expect(plantings[0]!.questions.find(({ key }) => key === "bearing_trees")!.known).toContain("77");
	});

	test("is in the grower's language, in the one asked for, or in both", async () => {
		const { place } = await askGrower(owner, iowa, { begin: false, language: "es" });
		const languages = async (language: string) =>
			(await papersOf(iowa, place, { language }))!.sheets.map((sheet) => sheet.language);
		expect([await languages("own"), await languages("en"), await languages("both")]).toEqual([
			["es"],
			["en"],
			["en", "es"],
		]);
		const [english, spanish] = (await papersOf(iowa, place, { language: "both" }))!.sheets;
		expect(english!.steps.map(({ key }) => key)).toEqual(spanish!.steps.map(({ key }) => key));
		expect(english!.pledge.title).not.toBe(spanish!.pledge.title);
	});

	test("is printed for all that have not answered, and only for the viewer's states", async () => {
		const { place, step } = await askGrower(owner, iowa, { begin: false, email: null });
		const asked = (await papersOf(iowa, { surveyId: place.surveyId }))!.total;
		expect(asked).toBeGreaterThan(1);
		await enter(iowa, place, typedFor(step, 40, 4000, 4000));
		expect((await papersOf(iowa, { surveyId: place.surveyId }))!.total).toBe(asked - 1);
		// Its own form can still be had.
		expect((await papersOf(iowa, place))!.sheets).toHaveLength(1);
		expect(await papersOf(wisconsin, place)).toBeUndefined();
		expect(await papersOf(wisconsin, { surveyId: place.surveyId })).toBeUndefined();
	});

	test("is printed for one state, district or county, each told with how many have not answered there", async () => {
		const { place } = await askGrower(owner, iowa, { begin: false, state: "19" });
		const { surveyId } = place;
		const areas = await asDesk(iowa, (trx) => listPaperAreas(trx, iowa, surveyId));
		const total = (await papersOf(iowa, { surveyId }))!.total;
		expect(areas.reduce((sum, { operations }) => sum + operations, 0)).toBe(total);
		for (const { countyFips, operations } of areas)
			expect((await papersOf(iowa, { surveyId }, { area: countyFips }))!.total).toBe(operations);
		const of = async (area: string) => (await papersOf(iowa, { surveyId }, { area }))!.total;
		expect([await of("19"), await of("55"), await of("no-such-district"), await of("\0")]).toEqual([
			total,
			0,
			0,
			total,
		]);
		await owner.query(
			"insert into directory.district (district_key, state_fips, name) values ('ia-paper', '19', 'Paper')",
		);
		await owner.query("update directory.county set district_key = 'ia-paper' where county_fips = $1", [
			areas[0]!.countyFips,
		]);
		expect(await of("ia-paper")).toBe(areas[0]!.operations);
		expect(await asDesk(wisconsin, (trx) => listPaperAreas(trx, wisconsin, surveyId))).toEqual([]);
	});

	test("has a place for each question that can be answered on paper, and no other", async () => {
		const { place } = await askGrower(owner, iowa, { begin: false });
		const { sheets, definition } = (await papersOf(iowa, place))!;
		const asked = definition.screens.flatMap(({ questions }) =>
			questions.filter(({ type }) => type !== "photo").map(({ key }) => key),
		);
		expect(sheets[0]!.steps.flatMap(({ questions }) => questions.map(({ key }) => key))).toEqual(asked);
	});
});
